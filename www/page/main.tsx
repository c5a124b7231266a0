import { signal } from "@preact/signals";
import { render } from "preact";
import { boot } from "./bridge/boot";
import "./style.css";

const state = signal("starting");

function App() {
  return (
    <main>
      <h1>Widthwise</h1>
      <p id="state">{state}</p>
    </main>
  );
}

const root = document.getElementById("app");
if (root) render(<App />, root);

boot().then(
  (pool) => {
    // Reachable from the console and from the browser tests.
    Object.assign(globalThis, { widthwise: { pool } });
    state.value = "ready";
  },
  (error: unknown) => {
    state.value = String(error);
  },
);
