import { describe, expect, it } from "vitest";
import { Line } from "./line";

/** A worker that answers when told to. */
function desk() {
  const open: { request: string; answer: (text: string) => void; refuse: (why: Error) => void }[] = [];
  return {
    open,
    ask: (request: string) => new Promise<string>((answer, refuse) => open.push({ request, answer, refuse })),
  };
}

const settle = () => new Promise((resolve) => setTimeout(resolve, 0));

describe("the line in front of a worker", () => {
  it("keeps one request in flight and of those that wait only the newest", async () => {
    const worker = desk();
    const line = new Line(worker, ["curve"]);
    const seen: string[] = [];
    for (const text of ["a", "b", "c"]) line.put("curve", text, (reply) => seen.push(reply), () => undefined);
    expect(worker.open.map((job) => job.request)).toEqual(["a"]);
    worker.open[0]?.answer("A");
    await settle();
    expect(worker.open.map((job) => job.request)).toEqual(["a", "c"]);
    worker.open[1]?.answer("C");
    await settle();
    expect(seen).toEqual(["A", "C"]);
  });

  it("takes the more urgent sort first", async () => {
    const worker = desk();
    const line = new Line(worker, ["curve", "points"]);
    line.put("check", "first", () => undefined, () => undefined);
    line.put("points", "points", () => undefined, () => undefined);
    line.put("curve", "curve", () => undefined, () => undefined);
    worker.open[0]?.answer("");
    await settle();
    expect(worker.open[1]?.request).toBe("curve");
  });

  it("goes on after a refusal", async () => {
    const worker = desk();
    const line = new Line(worker, []);
    const failures: unknown[] = [];
    line.put("a", "bad", () => undefined, (why) => failures.push(why));
    line.put("b", "good", () => undefined, () => undefined);
    worker.open[0]?.refuse(new Error("no"));
    await settle();
    expect(failures).toHaveLength(1);
    expect(worker.open[1]?.request).toBe("good");
  });
});
