// Builds the worker and the page with Vite and puts everything into one HTML file.
// Usage: node build/build.mjs --engine DIR --out FILE --version TEXT
//
// The same input gives the same file, byte for byte: no time, no path, no random name goes in.
import { createHash } from "node:crypto";
import { mkdirSync, readFileSync, writeFileSync } from "node:fs";
import { dirname, resolve } from "node:path";
import { fileURLToPath } from "node:url";
import { parseArgs } from "node:util";
import { deflateRawSync, gzipSync } from "node:zlib";
import { build } from "vite";
import { encode85 } from "./base85.mjs";

const www = resolve(dirname(fileURLToPath(import.meta.url)), "..");
const { values: args } = parseArgs({
  options: {
    engine: { type: "string", default: resolve(www, "../target/wasm-pkg") },
    out: { type: "string", default: resolve(www, "../target/dist/widthwise.html") },
    version: { type: "string", default: "development" },
  },
});

/** One entry as one classic script: modules do not load from file://. */
async function bundle(entry) {
  const result = await build({
    configFile: false,
    root: www,
    logLevel: "warn",
    define: {
      "process.env.NODE_ENV": JSON.stringify("production"),
      __VERSION__: JSON.stringify(args.version),
    },
    resolve: { alias: { "#engine": resolve(args.engine, "engine.js") } },
    build: {
      write: false,
      target: "es2022",
      modulePreload: false,
      assetsInlineLimit: Number.MAX_SAFE_INTEGER,
      cssCodeSplit: false,
      lib: { entry: resolve(www, entry), formats: ["iife"], name: "widthwiseBundle" },
    },
  });
  const output = (Array.isArray(result) ? result : [result]).flatMap((part) => part.output);
  const scripts = output.filter((part) => part.type === "chunk").map((part) => part.code);
  const styles = output
    .filter((part) => part.type === "asset" && part.fileName.endsWith(".css"))
    .map((part) => String(part.source));
  if (scripts.length !== 1) throw new Error(`${entry}: one script expected, got ${scripts.length}`);
  return { script: closeSafe(scripts[0]), style: styles.join("\n").trim() };
}

/** Text inside <script> must not end it, nor open a comment that swallows its end. */
function closeSafe(script) {
  return script.replaceAll("</script", "<\\/script").replaceAll("<!--", "<\\!--").trim();
}

function hash(text) {
  return `'sha256-${createHash("sha256").update(text).digest("base64")}'`;
}

const [worker, page, unpack] = [await bundle("worker/main.ts"), await bundle("page/main.tsx"), await bundle("page/unpack.ts")];
const wasm = readFileSync(resolve(args.engine, "engine_bg.wasm"));
const icon = readFileSync(resolve(www, "page/icon.svg"), "utf8").trim();
/** Deflated, as text that HTML leaves alone; unpacked by page/unpack.ts and page/bridge/boot.ts. */
const packed = (content) => encode85(deflateRawSync(content, { level: 9 }));

/** The page with what differs between the file and the served page: the file knows of nothing beside it. */
function assemble(beside) {
  const policy = [
    "default-src 'none'",
    `script-src ${hash(unpack.script)} ${hash(page.script)} 'wasm-unsafe-eval'`,
    `style-src ${hash(page.style)}`,
    beside === "" ? "worker-src blob:" : "worker-src blob: 'self'; manifest-src 'self'",
    "img-src data: blob:",
    "connect-src 'none'",
    "base-uri 'none'",
    "form-action 'none'",
  ].join("; ");
  const parts = {
    POLICY: policy,
    ICON: `data:image/svg+xml;base64,${Buffer.from(icon).toString("base64")}`,
    BESIDE: beside,
    STYLE: page.style,
    WASM: packed(wasm),
    WORKER: worker.script,
    PROGRAM: packed(page.script),
    SCRIPT: unpack.script,
  };
  return readFileSync(resolve(www, "index.html"), "utf8").replace(/%([A-Z]+)%/g, (all, key) => parts[key] ?? all);
}

const html = assemble("");
/** From a stick, over a group's server or on a phone: it has to stay small. */
const MOST_BYTES = 1_200_000;
if (Buffer.byteLength(html) > MOST_BYTES) {
  throw new Error(`the single file has ${Buffer.byteLength(html)} bytes, ${MOST_BYTES} allowed`);
}
mkdirSync(dirname(args.out), { recursive: true });
writeFileSync(args.out, html);

// The same page to be put on a group's own web server: kept by the browser for times without network.
const served = assemble('<link rel="manifest" href="manifest.webmanifest" />');
const folder = resolve(dirname(args.out), "served");
mkdirSync(folder, { recursive: true });
writeFileSync(resolve(folder, "index.html"), served);
writeFileSync(resolve(folder, "icon.svg"), icon);
const kept = { HASH: createHash("sha256").update(served).digest("hex").slice(0, 16) };
for (const name of ["sw.js", "manifest.webmanifest"]) {
  const text = readFileSync(resolve(www, "served", name), "utf8").replace(/%([A-Z]+)%/g, (all, key) => kept[key] ?? all);
  writeFileSync(resolve(folder, name), text);
}

const size = (bytes) => `${(bytes / 1000).toFixed(0)} kB`;
console.log(
  `widthwise.html ${size(Buffer.byteLength(html))} (${size(gzipSync(html, { level: 9 }).length)} compressed; ` +
    `engine ${size(wasm.length)}, page ${size(page.script.length)}), sha256 ${createHash("sha256").update(html).digest("hex")}`,
);
