// Runs a Rust test harness built for wasm32-unknown-unknown: the same #[test] functions as natively.
// Usage: node run.mjs HARNESS.wasm NAMES   (NAMES: what the native harness says to --list)
//
// On this target the harness has no arguments, no output and no clock; it runs every test in one
// thread and traps at the first failure. So: returning means that all passed, the stack of a trap
// names the test that failed, and every name of the native list must occur in the module, so that
// no test is silently missing here.
import { readFileSync } from "node:fs";

const [, , path, namesPath] = process.argv;
const bytes = readFileSync(path);
const names = readFileSync(namesPath, "utf8")
  .split("\n")
  .filter((line) => line.endsWith(": test"))
  .map((line) => line.slice(0, -": test".length));
const missing = names.filter((name) => !bytes.includes(name));
if (missing.length > 0) {
  console.log(`not in the WebAssembly build: ${missing.join(", ")}`);
  process.exit(1);
}

let memory;
let state = 0x9e3779b97f4a7c15n;
/** Seeds of the property tests: a fixed stream (splitmix64), so that a failure comes back. */
function nextByte() {
  state = (state + 0x9e3779b97f4a7c15n) & 0xffffffffffffffffn;
  let z = state;
  z = ((z ^ (z >> 30n)) * 0xbf58476d1ce4e5b9n) & 0xffffffffffffffffn;
  return Number((z ^ (z >> 27n)) & 0xffn);
}
const env = {
  // The custom backend of the crate getrandom 0.3; 0 is success.
  __getrandom_v03_custom(pointer, length) {
    const view = new Uint8Array(memory.buffer, pointer, length);
    for (let i = 0; i < length; i += 1) view[i] = nextByte();
    return 0;
  },
};

const { instance } = await WebAssembly.instantiate(bytes, { env });
memory = instance.exports.memory;
try {
  instance.exports.main(0, 0);
  console.log(`test result: ok. ${names.length} passed; 0 failed`);
} catch (error) {
  const frames = String(error.stack).split("\n");
  console.log(frames.slice(0, 40).join("\n"));
  console.log(`test result: FAILED. 0 passed; 1 failed (the first of ${names.length} to trap)`);
  process.exit(1);
}
