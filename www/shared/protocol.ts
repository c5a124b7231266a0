// What page and worker say to each other. Requests and bodies are generated from the Rust types.
import type { Body } from "./generated/Body";
import type { Refusal } from "./generated/Refusal";
import type { Request } from "./generated/Request";

/** A column of numbers; its buffer is transferred, never copied. */
export interface Column {
  name: string;
  unit: string;
  values: Float64Array;
}

/** An answer: plain data, long columns beside it. */
export interface Reply {
  body: Body;
  columns: Column[];
}

/** How far long work has come. */
export interface Progress {
  done: number;
  total: number;
}

/** Failures that tests force on purpose; each must be survived. */
export type Forced = "trap" | "panic" | "memory" | "hang";

export type ToWorker =
  | { kind: "start"; module: WebAssembly.Module }
  | { kind: "run"; id: number; request: Request }
  | { kind: "force"; id: number; what: Forced };

export type FromWorker =
  | { kind: "ready" }
  | { kind: "reply"; id: number; reply: Reply }
  | { kind: "refused"; id: number; refusal: Refusal }
  | ({ kind: "progress"; id: number } & Progress)
  /** Text of a Rust panic; the trap that follows carries no text of its own. */
  | { kind: "panic"; text: string }
  /** The instance is unusable from now on: the page ends this worker. */
  | { kind: "trap"; id: number; message: string };
