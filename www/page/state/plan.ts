/** What the plan room last answered. */
import { signal } from "@preact/signals";

/** One stop of a plan. */
export interface Stop {
  /** Id of the row it became, or "". */
  id: string;
  /** True W, GeV. */
  w: number;
  hours: number;
  /** Number to dial, with unit. */
  dial: string;
  /** Whether it is the one to go to next. */
  next: boolean;
  /** One line: why there. */
  why: string;
}

export const planned = signal<Stop[]>([]);
