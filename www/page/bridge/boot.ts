// Starts the engine from what is inline in the page: no fetch, so that it works from file://.
import { inflateSync } from "fflate";
import { decode85 } from "./base85";
import { BootFailed } from "./failures";
import { Pool } from "./pool";

/** Compiles the engine once and starts the pool. */
export async function boot(size?: number): Promise<Pool> {
  const module = await WebAssembly.compile(await engineBytes());
  const url = URL.createObjectURL(new Blob([inline("worker-source")], { type: "text/javascript" }));
  return new Pool(module, () => new Worker(url), size);
}

function inline(id: string): string {
  const text = document.getElementById(id)?.textContent;
  if (!text) throw new BootFailed(`the page is incomplete: ${id} is missing`);
  return text;
}

async function engineBytes(): Promise<Uint8Array<ArrayBuffer>> {
  // After the page has shown itself: a megabyte is read here.
  await new Promise((resolve) => setTimeout(resolve));
  const packed = decode85(inline("engine-wasm").trim());
  if (typeof DecompressionStream === "undefined") return new Uint8Array(inflateSync(packed));
  const stream = new Blob([packed]).stream().pipeThrough(new DecompressionStream("deflate-raw"));
  return new Uint8Array(await new Response(stream).arrayBuffer());
}
