/** What the plan room last answered, and which sheet it was made for. */
import { computed, signal } from "@preact/signals";
import type { Warning } from "./types";

/** One stop of a timetable. */
export interface PlannedStop {
  fill: number;
  /** Start of data taking, h from when the plan was made. */
  start: number;
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

/** What the plan promises for one quantity, in the units of `unit`. */
export interface ForecastView {
  name: string;
  unit: string;
  value: number;
  wanted: number | null;
  now: number | null;
  planned: number | null;
  uniform: number | null;
  floor: number | null;
}

/** A plan. */
export interface PlanView {
  stops: PlannedStop[];
  forecasts: ForecastView[];
  /** Energies and relative gain of information per further hour there, 1/h. */
  gain: { w: Float64Array; perHour: Float64Array } | null;
  beamHours: number;
  certificate: number;
  efficiency: number;
  exact: boolean;
  uniformEfficiency: number;
  costs: [string, number][];
  warnings: Warning[];
  /** Revision of the sheet it was made for. */
  revision: number;
}

export const plan = signal<PlanView | null>(null);
export const planning = signal(false);
export const planRefused = signal("");

/** Stops that are still to come: none of the rows measured since the plan was made stands for them. */
export const planned = computed<PlannedStop[]>(() => plan.value?.stops ?? []);

/** The stop to go to next. */
export const nextStop = computed<PlannedStop | null>(() => planned.value[0] ?? null);

/** Hours from when the plan was made until its next fill begins; `null`: none is planned. */
export const nextFill = computed<number | null>(() => {
  const [first, ...rest] = planned.value;
  return rest.find((stop) => stop.fill > (first?.fill ?? 0))?.start ?? null;
});
