/** Pseudo-experiments in ranges: split over the workers, put together again in an order that no worker decides. */
import type { TrialRange } from "../../shared/generated/TrialRange";
import type { TrialRow } from "../../shared/generated/TrialRow";

/** Trials of one range: short enough that a fit asked for meanwhile does not wait long. */
export const RANGE = 10;

/** Ranges that hold the trials 0 to `count` - 1 once each. */
export function ranges(count: number, seed: number, profiles: boolean, size = RANGE): TrialRange[] {
  const found: TrialRange[] = [];
  for (let first = 0; first < count; first += size) {
    found.push({ seed, first, count: Math.min(size, count - first), profiles });
  }
  return found;
}

/** Rows of all ranges by their number: the same list however they were split and whichever came first. */
export function merged(parts: readonly (readonly TrialRow[])[]): TrialRow[] {
  return parts.flat().sort((a, b) => a.k - b.k);
}

/** Runs all ranges, `lanes` at a time; tells how many trials are done. The first failure ends it. */
export async function inLanes(
  all: readonly TrialRange[],
  lanes: number,
  run: (range: TrialRange) => Promise<TrialRow[]>,
  onDone: (done: number) => void = () => undefined,
): Promise<TrialRow[]> {
  const waiting = [...all];
  const parts: TrialRow[][] = [];
  let done = 0;
  const lane = async (): Promise<void> => {
    for (let next = waiting.shift(); next !== undefined; next = waiting.shift()) {
      try {
        parts.push(await run(next));
      } catch (reason) {
        waiting.length = 0;
        throw reason;
      }
      done += next.count;
      onDone(done);
    }
  };
  await Promise.all(Array.from({ length: Math.max(1, Math.min(lanes, all.length)) }, lane));
  return merged(parts);
}
