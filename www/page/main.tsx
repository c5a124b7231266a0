import "./language";
import { boot } from "./bridge/boot";
import { start } from "./start";
import "./style/index.css";

const root = document.getElementById("app");
const pool = boot();

// Reachable from the console and from the browser tests.
pool.then(
  (ready) => Object.assign(globalThis, { widthwise: { pool: ready } }),
  () => undefined,
);
if (root !== null) void start(root, pool);
