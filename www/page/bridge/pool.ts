// The page's side of the worker bridge: a pool of workers over one compiled module.
//
// - Every request has an id; an answer to a request that is no longer wanted is dropped.
// - Cancelling a running request ends its worker; a new one starts from the kept module (some ms).
// - After a trap the worker is ended, a new one started, and the caller gets the request back.
// - Background work (fits, plans, trials) never takes the last worker, so the curve stays alive.
import type { Request } from "../../shared/generated/Request";
import type { Forced, FromWorker, Progress, Reply, ToWorker } from "../../shared/protocol";
import { BootFailed, Cancelled, Refused, Trapped } from "./failures";

/** How a worker is made; tests bring their own. */
export type Spawn = () => Worker;

export interface RunOptions {
  /** Aborting it cancels the request, running or waiting. */
  signal?: AbortSignal;
  /** Called as long work moves on. */
  onProgress?: (progress: Progress) => void;
  /** Long work that must leave a worker free for the rest. */
  background?: boolean;
}

interface Job {
  id: number;
  message: ToWorker;
  request: Request | undefined;
  options: RunOptions;
  resolve: (reply: Reply) => void;
  reject: (why: Error) => void;
}

interface Slot {
  worker: Worker | undefined;
  ready: boolean;
  job: Job | undefined;
  panic: string;
  timer: ReturnType<typeof setTimeout> | undefined;
  boots: number;
}

/** A worker that does not say "ready" within this time counts as refused. */
const BOOT_TIMEOUT_MS = 20_000;
/** A slot that fails to start this often in a row is given up. */
const MOST_BOOTS = 3;

export class Pool {
  readonly #slots: Slot[];
  readonly #queue: Job[] = [];
  readonly #latest = new Map<string, Job>();
  #nextId = 1;
  #bootFailure: BootFailed | undefined;

  constructor(
    private readonly module: WebAssembly.Module,
    private readonly spawn: Spawn,
    readonly size: number = defaultSize(),
  ) {
    this.#slots = Array.from({ length: Math.max(1, size) }, () => emptySlot());
    for (const slot of this.#slots) this.#start(slot);
  }

  /** Runs one request; rejects with Refused, Trapped, Cancelled or BootFailed. */
  run(request: Request, options: RunOptions = {}): Promise<Reply> {
    return new Promise((resolve, reject) => {
      const id = this.#nextId++;
      this.#enqueue({ id, message: { kind: "run", id, request }, request, options, resolve, reject });
    });
  }

  /**
   * Runs the newest request under a key and drops what is older: a waiting one at once, a running
   * one when its answer comes. Those reject with Cancelled.
   */
  latest(key: string, request: Request, options: RunOptions = {}): Promise<Reply> {
    const older = this.#latest.get(key);
    if (older) this.#drop(older);
    return new Promise((resolve, reject) => {
      const id = this.#nextId++;
      const job: Job = { id, message: { kind: "run", id, request }, request, options, resolve, reject };
      this.#latest.set(key, job);
      this.#enqueue(job);
    });
  }

  /** Provokes a failure, to test that it is survived. */
  force(what: Forced, options: RunOptions = {}): Promise<Reply> {
    return new Promise((resolve, reject) => {
      const id = this.#nextId++;
      this.#enqueue({ id, message: { kind: "force", id, what }, request: undefined, options, resolve, reject });
    });
  }

  /** Ends all workers. */
  close(): void {
    for (const slot of this.#slots) this.#end(slot);
    for (const job of this.#queue.splice(0)) job.reject(new Cancelled());
  }

  #enqueue(job: Job): void {
    const { signal } = job.options;
    if (signal?.aborted) return job.reject(new Cancelled());
    signal?.addEventListener("abort", () => this.#cancel(job), { once: true });
    this.#queue.push(job);
    this.#feed();
  }

  #feed(): void {
    if (this.#slots.every((slot) => !slot.worker) && this.#bootFailure) {
      for (const job of this.#queue.splice(0)) job.reject(this.#bootFailure);
      return;
    }
    for (const slot of this.#slots) {
      if (!slot.ready || slot.job) continue;
      const next = this.#queue.findIndex((job) => !job.options.background || this.#roomBehind(slot));
      const [job] = next < 0 ? [] : this.#queue.splice(next, 1);
      if (!job) return;
      slot.job = job;
      slot.worker?.postMessage(job.message);
    }
  }

  /** Whether background work in this slot leaves another one free of it. */
  #roomBehind(slot: Slot): boolean {
    if (this.#slots.length === 1) return true;
    return this.#slots.some((other) => other !== slot && other.worker && !other.job?.options.background);
  }

  /** No longer wanted, but left to finish: shorter than a new worker for short work. */
  #drop(job: Job): void {
    const waiting = this.#queue.indexOf(job);
    if (waiting >= 0) this.#queue.splice(waiting, 1);
    job.reject(new Cancelled());
  }

  #cancel(job: Job): void {
    this.#drop(job);
    const slot = this.#slots.find((candidate) => candidate.job === job);
    if (slot) this.#restart(slot);
  }

  #start(slot: Slot): void {
    slot.boots += 1;
    try {
      const worker = this.spawn();
      slot.worker = worker;
      worker.onmessage = (event: MessageEvent<FromWorker>) => {
        if (slot.worker === worker) this.#hear(slot, event.data);
      };
      // A refused worker is an error event in some engines and a throw in others.
      worker.onerror = (event) => {
        event.preventDefault?.();
        if (slot.worker === worker) this.#failed(slot, event.message || "the worker stopped");
      };
      slot.timer = setTimeout(() => this.#failed(slot, "no answer while starting"), BOOT_TIMEOUT_MS);
      worker.postMessage({ kind: "start", module: this.module } satisfies ToWorker);
    } catch (error) {
      this.#failed(slot, String(error));
    }
  }

  #end(slot: Slot): void {
    clearTimeout(slot.timer);
    slot.worker?.terminate();
    slot.worker = undefined;
    slot.ready = false;
    slot.job = undefined;
  }

  #restart(slot: Slot): void {
    this.#end(slot);
    this.#start(slot);
  }

  #failed(slot: Slot, message: string): void {
    const { job, ready } = slot;
    const text = slot.panic ? `${slot.panic} (${message})` : message;
    this.#end(slot);
    slot.panic = "";
    job?.reject(new Trapped(text, job.request));
    if (ready || slot.boots < MOST_BOOTS) this.#start(slot);
    else this.#bootFailure = new BootFailed(text);
    this.#feed();
  }

  #hear(slot: Slot, message: FromWorker): void {
    switch (message.kind) {
      case "ready":
        clearTimeout(slot.timer);
        slot.ready = true;
        slot.boots = 0;
        break;
      case "panic":
        slot.panic = message.text;
        return;
      case "trap":
        this.#failed(slot, message.message);
        return;
      case "progress":
        if (slot.job?.id === message.id) slot.job.options.onProgress?.(message);
        return;
      case "reply":
      case "refused": {
        const { job } = slot;
        if (job?.id !== message.id) return;
        slot.job = undefined;
        if (message.kind === "reply") job.resolve(message.reply);
        else job.reject(new Refused(message.refusal));
      }
    }
    this.#feed();
  }
}

/** One worker for the hand, the rest for long work; never more than four. */
function defaultSize(): number {
  const cores = globalThis.navigator?.hardwareConcurrency || 2;
  return Math.min(4, Math.max(2, cores - 1));
}

function emptySlot(): Slot {
  return { worker: undefined, ready: false, job: undefined, panic: "", timer: undefined, boots: 0 };
}
