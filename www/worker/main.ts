// One worker, one WebAssembly instance. The page posts the compiled module first, then requests
// one at a time. After a trap the instance would answer wrongly: say so and do nothing more.
import { force, initSync, run } from "#engine";
import type { FromWorker, Reply, ToWorker } from "../shared/protocol";

declare const self: DedicatedWorkerGlobalScope;

let broken = false;

function post(message: FromWorker, transfer: Transferable[] = []): void {
  self.postMessage(message, transfer);
}

function guarded(id: number, work: () => void): void {
  try {
    work();
  } catch (error) {
    // A refusal is thrown as a plain object; whatever else comes out is a trap
    // (RuntimeError, or the engine's own error for an exhausted stack).
    if (error instanceof Error) {
      broken = true;
      post({ kind: "trap", id, message: `${error.name}: ${error.message}` });
    } else {
      post({ kind: "refused", id, refusal: error as never });
    }
  }
}

self.onmessage = (event: MessageEvent<ToWorker>) => {
  const message = event.data;
  if (broken) return;
  switch (message.kind) {
    case "start":
      initSync({ module: message.module });
      post({ kind: "ready" });
      break;
    case "run":
      guarded(message.id, () => {
        const reply = run(message.id, message.request) as Reply;
        const buffers = reply.columns.map((column) => column.values.buffer as ArrayBuffer);
        post({ kind: "reply", id: message.id, reply }, buffers);
      });
      break;
    case "force":
      guarded(message.id, () => force(message.what));
  }
};
