/** What a lane is. Every lane has a file of its own that exports one; `list.ts` names them all. */
import type { Drawing } from "./chart";

/** A column of a lane's table; NaN: nothing there. */
export interface LaneColumn {
  name: string;
  unit: string;
  values: ArrayLike<number>;
}

/** A lane over the shared energy axis. */
export interface Lane {
  /** Short, stable: what is remembered about the lane is kept under it. */
  id: string;
  title: string;
  unit: string;
  /** `tall`: as much room as the window has to give; `low`: a strip. The person may change it. */
  size: "tall" | "low";
  /** Reads signals; called again whenever one of them changes. */
  draw: () => Drawing;
  /** What the lane shows as numbers, for whoever does not see it and for CSV; the first column is W in GeV. */
  numbers: () => LaneColumn[];
  /** Whether there is anything to show; always, if absent. */
  there?: () => boolean;
  /** Why there is nothing to show, a few words after the title. */
  missing?: string;
  /** Shown only when asked for. */
  onDemand?: boolean;
  /** A word beside the title. */
  remark?: () => string;
  /** What the lane knows at an energy (GeV), for the read-out at the cursor. */
  readOut?: (w: number) => { name: string; text: string }[];
}

/** The value of a column at the energy next to `w`; `null` outside of what the column covers. */
export function nearest(columns: readonly LaneColumn[], of: number, w: number): number | null {
  const at = columns[0]?.values;
  if (at === undefined || at.length === 0 || w < (at[0] ?? 0) || w > (at[at.length - 1] ?? 0)) return null;
  let [low, high] = [0, at.length - 1];
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if ((at[middle] ?? 0) > w) high = middle;
    else low = middle;
  }
  const index = w - (at[low] ?? 0) < (at[high] ?? 0) - w ? low : high;
  const value = columns[of]?.values[index];
  return value === undefined || Number.isNaN(value) ? null : value;
}
