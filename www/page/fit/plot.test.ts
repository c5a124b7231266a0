import { describe, expect, it } from "vitest";
import { ticks } from "./plot";

describe("ticks of a small plot", () => {
  it("are round and inside", () => {
    const found = ticks(2874.03, 2874.37, 4);
    expect(found.map((value) => value.toFixed(1))).toEqual(["2874.1", "2874.2", "2874.3"]);
    expect(ticks(0, 4.8, 4)).toEqual([0, 2, 4]);
  });

  it.each([
    [-1, 1],
    [1e-7, 9e-7],
    [0, 1e5],
  ])("are between two and six from %f to %f", (from, to) => {
    const found = ticks(from, to, 4);
    expect(found.length).toBeGreaterThanOrEqual(2);
    expect(found.length).toBeLessThanOrEqual(6);
  });
});
