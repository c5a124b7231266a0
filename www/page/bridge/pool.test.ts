// The pool against stand-in workers: what must hold whatever the engine does.
import { afterEach, beforeEach, describe, expect, it, vi } from "vitest";
import type { Request } from "../../shared/generated/Request";
import type { FromWorker, ToWorker } from "../../shared/protocol";
import { Pool } from "./pool";

const request: Request = { kind: "tables" };
const reply = { body: { kind: "text", text: "" }, columns: [] } as never;

/** A worker whose answers the test gives. */
class Stand {
  onmessage: ((event: { data: FromWorker }) => void) | null = null;
  onerror: ((event: { message: string }) => void) | null = null;
  heard: ToWorker[] = [];
  ended = false;

  postMessage(message: ToWorker): void {
    this.heard.push(message);
    if (message.kind === "start" && Stand.bootable) this.say({ kind: "ready" });
  }
  terminate(): void {
    this.ended = true;
  }
  say(data: FromWorker): void {
    this.onmessage?.({ data });
  }
  get running(): number | undefined {
    const last = this.heard.at(-1);
    return last?.kind === "run" ? last.id : undefined;
  }
  answer(): void {
    this.say({ kind: "reply", id: this.running ?? -1, reply });
  }
  static bootable = true;
}

function pool(size: number): { pool: Pool; stands: Stand[]; live: () => Stand[] } {
  const stands: Stand[] = [];
  const made = new Pool(
    {} as WebAssembly.Module,
    () => {
      const stand = new Stand();
      stands.push(stand);
      return stand as unknown as Worker;
    },
    size,
  );
  return { pool: made, stands, live: () => stands.filter((stand) => !stand.ended) };
}

const name = (error: Error) => error.name;

beforeEach(() => {
  Stand.bootable = true;
});
afterEach(() => {
  vi.useRealTimers();
});

describe("answers", () => {
  it("go to the request they belong to", async () => {
    const { pool: two, stands } = pool(2);
    const [first, second] = [two.run(request), two.run(request)];
    stands[1]?.answer();
    stands[0]?.answer();
    expect(await Promise.all([first, second])).toEqual([reply, reply]);
  });

  it("to superseded requests are dropped, and waiting ones never start", async () => {
    const { pool: one, stands } = pool(1);
    const outcomes = [1, 2, 3].map(() => one.latest("curve", request).catch(name));
    stands[0]?.answer();
    expect(stands[0]?.running).toBe(3);
    stands[0]?.answer();
    expect(await Promise.all(outcomes)).toEqual(["Cancelled", "Cancelled", reply]);
  });

  it("refused carry the refusal", async () => {
    const { pool: one, stands } = pool(1);
    const refusal = { field: "model.j", value: "-1", allowed: "0, 1/2, 1", message: "no spin" };
    const outcome = one.run(request).catch((error: { refusal: unknown }) => error.refusal);
    stands[0]?.say({ kind: "refused", id: 1, refusal });
    expect(await outcome).toEqual(refusal);
  });

  it("report progress of their own request only", () => {
    const { pool: one, stands } = pool(1);
    const heard: number[] = [];
    void one.run(request, { onProgress: ({ done }) => heard.push(done) });
    stands[0]?.say({ kind: "progress", id: 1, done: 5, total: 9 });
    stands[0]?.say({ kind: "progress", id: 77, done: 6, total: 9 });
    expect(heard).toEqual([5]);
  });
});

describe("cancelling", () => {
  it("ends a running request's worker and starts another", async () => {
    const { pool: one, stands, live } = pool(1);
    const stop = new AbortController();
    const outcome = one.run(request, { signal: stop.signal }).catch(name);
    stop.abort();
    expect(await outcome).toBe("Cancelled");
    expect(stands.map((stand) => stand.ended)).toEqual([true, false]);
    const next = one.run(request);
    live()[0]?.answer();
    expect(await next).toEqual(reply);
  });

  it("leaves other requests alone", async () => {
    const { pool: one, stands } = pool(1);
    const stop = new AbortController();
    const first = one.run(request);
    const second = one.run(request, { signal: stop.signal }).catch(name);
    stop.abort();
    expect(await second).toBe("Cancelled");
    expect(stands[0]?.ended).toBe(false);
    stands[0]?.answer();
    expect(await first).toEqual(reply);
  });
});

describe("a worker that breaks", () => {
  it.each(["trap message", "error event"])("by %s is replaced, and the request comes back", async (how) => {
    const { pool: one, stands, live } = pool(1);
    const outcome = one.run(request).catch((error: { name: string; message: string; request: unknown }) => error);
    const waiting = one.run(request);
    stands[0]?.say({ kind: "panic", text: "index 7" });
    if (how === "trap message") stands[0]?.say({ kind: "trap", id: 1, message: "unreachable" });
    else stands[0]?.onerror?.({ message: "unreachable" });
    expect(await outcome).toMatchObject({ name: "Trapped", message: "index 7 (unreachable)", request });
    expect(stands[0]?.ended).toBe(true);
    live()[0]?.answer();
    expect(await waiting).toEqual(reply);
  });

  it("while starting is tried again, then said", async () => {
    vi.useFakeTimers();
    Stand.bootable = false;
    const { pool: one, stands } = pool(1);
    const outcome = one.run(request).catch(name);
    await vi.advanceTimersByTimeAsync(100_000);
    expect(await outcome).toBe("BootFailed");
    expect(stands.length).toBe(3);
    expect(await one.run(request).catch(name)).toBe("BootFailed");
  });

  it("by a throw while starting is the same", async () => {
    const refusing = new Pool(
      {} as WebAssembly.Module,
      () => {
        throw new Error("SecurityError");
      },
      2,
    );
    expect(await refusing.run(request).catch(name)).toBe("BootFailed");
  });
});

it("background work leaves a worker free", async () => {
  const { pool: two, stands } = pool(2);
  const [first, second] = [two.run(request, { background: true }), two.run(request, { background: true })];
  expect(stands.filter((stand) => stand.running).length).toBe(1);
  const curve = two.run(request);
  const busy = stands.find((stand) => stand.running === 1);
  const free = stands.find((stand) => stand !== busy);
  expect(free?.running).toBe(3);
  free?.answer();
  await curve;
  busy?.answer();
  await first;
  stands.find((stand) => stand.running === 2)?.answer();
  expect(await second).toEqual(reply);
});
