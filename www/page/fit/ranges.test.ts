import { describe, expect, it } from "vitest";
import type { TrialRange } from "../../shared/generated/TrialRange";
import type { TrialRow } from "../../shared/generated/TrialRow";
import { inLanes, merged, ranges } from "./ranges";
import { secondsLeft } from "./study";

/** A trial that depends on seed and number alone, as the engine's do. */
function row(seed: number, k: number): TrialRow {
  return { k, converged: true, values: [Math.sin(seed + k)], errors: [1], statistic: k, rise_at_truth: [] };
}

/** A worker that answers later the earlier it was asked, so that answers come out of order. */
async function slow(range: TrialRange): Promise<TrialRow[]> {
  await new Promise((resolve) => setTimeout(resolve, Math.max(0, 12 - range.first / 4)));
  return Array.from({ length: range.count }, (_, i) => row(range.seed, range.first + i));
}

describe("ranges of pseudo-experiments", () => {
  it.each([
    [0, 10],
    [1, 10],
    [40, 10],
    [200, 7],
    [23, 100],
  ])("hold each of %i trials once, in ranges of %i", (count, size) => {
    const numbers = ranges(count, 5, false, size).flatMap((range) => Array.from({ length: range.count }, (_, i) => range.first + i));
    expect(numbers).toEqual(Array.from({ length: count }, (_, i) => i));
    expect(ranges(count, 5, true, size).every((range) => range.seed === 5 && range.profiles && range.count <= size)).toBe(true);
  });

  it("are put together in the order of their numbers", () => {
    expect(merged([[row(1, 2), row(1, 3)], [row(1, 0)], [row(1, 1)]]).map(({ k }) => k)).toEqual([0, 1, 2, 3]);
  });

  it("give the same rows for any number of workers and any size", async () => {
    const alone = await inLanes(ranges(47, 9, false, 47), 1, slow);
    for (const lanes of [1, 2, 3, 8]) expect(await inLanes(ranges(47, 9, false, 10), lanes, slow)).toEqual(alone);
  });

  it("never run more at once than there are lanes, and say how many trials are done", async () => {
    let [now, most] = [0, 0];
    const told: number[] = [];
    await inLanes(
      ranges(50, 1, false),
      2,
      async (range) => {
        now += 1;
        most = Math.max(most, now);
        const rows = await slow(range);
        now -= 1;
        return rows;
      },
      (done) => told.push(done),
    );
    expect(most).toBe(2);
    expect(told).toEqual([10, 20, 30, 40, 50]);
  });

  it("end at the first failure", async () => {
    let asked = 0;
    const run = (): Promise<TrialRow[]> => {
      asked += 1;
      return Promise.reject(new Error("refused"));
    };
    await expect(inLanes(ranges(100, 1, false), 2, run)).rejects.toThrow("refused");
    expect(asked).toBe(2);
  });

  it("take the time left from the pace so far", () => {
    expect(secondsLeft(0, 200, 500)).toBeNull();
    expect(secondsLeft(50, 200, 1000)).toBe(3);
    expect(secondsLeft(200, 200, 4000)).toBe(0);
  });
});
