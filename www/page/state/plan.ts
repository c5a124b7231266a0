/** The newest plan, and what of it is still ahead. Nothing here is computed by the page. */
import { computed, signal } from "@preact/signals";
import type { Changes } from "../../shared/generated/Changes";
import type { ForecastReading } from "../../shared/generated/ForecastReading";
import type { KeptPlan } from "../../shared/generated/KeptPlan";
import type { PlannedRow } from "../../shared/generated/PlannedRow";
import type { StayOrMove } from "../../shared/generated/StayOrMove";
import { addRow, nowWithZone } from "./rows";
import { typed } from "../format/typed";
import { now } from "./health";
import { rows, sheet } from "./sheet";
import type { Warning } from "./types";

/** One stop of a timetable. */
export interface PlannedStop {
  fill: number;
  /** Start of data taking, ms since 1970. */
  at: number;
  /** True W, GeV. */
  w: number;
  /** Number to dial, with unit. */
  dial: string;
  /** Live hours. */
  hours: number;
  settle: number;
  expected: number;
  /** One line: why there. */
  why: string;
}

/** A plan as it was answered, with what it was made for. */
export interface PlanView {
  stops: PlannedStop[];
  forecasts: ForecastReading[];
  /** Energies and relative gain of information per further hour there, 1/h; `now`: on top of what is known now, else of the plan. */
  gain: { w: Float64Array; perHour: Float64Array; now: boolean } | null;
  /** (hours of beam, error of the first goal in its unit). */
  against: [number, number | null][];
  /** What the curve above is of. */
  main: ForecastReading | null;
  beamHours: number;
  certificate: number;
  efficiency: number;
  exact: boolean;
  uniformEfficiency: number;
  /** (prior standard deviation of the mass in GeV, share lost). */
  massOff: [number, number] | null;
  truths: number;
  truthsAccuracy: number | null;
  /** Expected 2 ln of the likelihood ratio of two hypotheses: (planned, uniform). */
  logRatio: [number, number] | null;
  stay: StayOrMove | null;
  basis: string;
  changes: Changes | null;
  warnings: Warning[];
  /** As answered: to be given back when the plan is made again, and to trials. */
  raw: { rows: PlannedRow[]; parameters: KeptPlan["parameters"] };
  /** Which measurements it was made for. */
  dataKey: string;
  /** Rows of data there were. */
  rowsThen: number;
}

/** The newest plan of this sheet. */
export const plan = signal<PlanView | null>(null);

/** How many stops of the plan have been begun: rows added since, at the numbers to dial, in the plan's order. */
const begun = computed(() => {
  const made = plan.value;
  if (made === null) return 0;
  let next = 0;
  for (const row of rows.value.slice(made.rowsThen)) if (row.setting === made.stops[next]?.dial) next += 1;
  return next;
});

/** Stops that are still to come. */
export const planned = computed<PlannedStop[]>(() => plan.value?.stops.slice(begun.value) ?? []);

/** The stop to go to next. */
export const nextStop = computed<PlannedStop | null>(() => planned.value[0] ?? null);

/** What of the plan a later one is compared with. */
export function kept(): KeptPlan | null {
  const made = plan.peek();
  return made === null ? null : { rows: made.raw.rows.slice(begun.peek()), parameters: made.raw.parameters };
}

/** Measurements as far as a plan depends on them. */
export function measured(list: typeof rows.value): string {
  const done = list.filter((row) => row.counts || row.cross_section);
  return JSON.stringify(done.map((row) => [row.id, row.counts, row.luminosity, row.setting, row.w, row.cross_section, row.left_out]));
}

/** Starts the next stop as the running row. The first one of a plan also says when its hours began. */
export function accept(stop: PlannedStop): void {
  addRow({ setting: stop.dial }, true, (sheet) =>
    sheet.plan.starts || sheet.plan.hours_used ? sheet : { ...sheet, plan: { ...sheet.plan, starts: nowWithZone() } },
  );
}

/** When the next fill begins, ms since 1970; `null`: none is planned. */
export const nextFill = computed<number | null>(() => {
  const [first, ...rest] = planned.value;
  return rest.find((stop) => stop.fill > (first?.fill ?? 0))?.at ?? null;
});

/** Hours of the sheet that are left by the clock, or by what it says is used; `null`: it does not say. */
export const hoursLeft = computed<number | null>(() => {
  const { hours, hours_used: used, starts } = sheet.value.plan;
  const [all, gone] = [inHours(hours), inHours(used)];
  const begun = Date.parse(starts ?? "");
  if (all === null) return null;
  if (used) return gone === null ? null : Math.max(0, all - gone);
  return now.value > begun ? Math.max(0, all - (now.value - begun) / 3.6e6) : null;
});

/** Only to show what is left; what a time means is decided by the core. */
function inHours(text: string | null | undefined): number | null {
  const parts = typed(text ?? "");
  const per = { h: 1, min: 1 / 60, d: 24 }[parts?.rest.trim() ?? ""];
  return parts === null || per === undefined ? null : parts.value * per;
}
