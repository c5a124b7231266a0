/** What the worker last answered, in the page's own words. Nothing here is computed by the page. */
import { computed, signal } from "@preact/signals";
import type { Named, Refusal, Warning } from "./types";

/** A curve: energies in GeV and named columns of the same length. */
export interface Curve {
  w: Float64Array;
  columns: { name: string; unit: string; values: Float64Array }[];
  accuracy: number;
}

/** One row of data as the chain understood it. */
export interface PointView {
  id: string;
  /** True W, GeV. */
  w: number;
  wError: number;
  /** Number to dial, with unit. */
  dial: string;
  used: boolean;
  running: boolean;
  /** Measured cross section and error as drawn on the curve, nb; `null`: none yet. */
  sigma: number | null;
  sigmaError: number;
  luminosity: number;
  /** Live time, h. */
  time: number;
  expected: number | null;
  seen: number | null;
  pull: number | null;
  p: number | null;
}

/** Everything at one W. */
export interface CursorView {
  w: number;
  dial: string;
  values: Named[];
}

/** One fitted parameter. */
export interface ParameterView {
  id: string;
  name: string;
  symbol: string;
  value: number;
  error: number | null;
  unit: string;
  atLimit: boolean;
}

/** The fit's answer. */
export interface FitView {
  parameters: ParameterView[];
  /** Correlation matrix, row by row. */
  correlation: number[][];
  statistic: number;
  degrees: number;
  p: number | null;
  /** Counts are large enough for the p-value to be taken from the chi-squared distribution. */
  pHolds: boolean;
  why: string;
  nuisances: { name: string; pull: number; error: number; impacts: number[] }[];
  converged: boolean;
  /** Pull of each point: (row id, pull). */
  pulls: [string, number][];
  /** The data it was fitted to, to tell a new point from a moved slider. */
  dataKey: unknown;
  /** Which sheet and which free parameters: only then can two fits be compared. */
  fitKey: string;
  /** Text of each fitted value by its path in the sheet, for "take these values". */
  texts: Record<string, string>;
  warnings: Warning[];
}

export const problems = signal<Refusal[]>([]);
export const warnings = signal<Warning[]>([]);
export const curve = signal<Curve | null>(null);
export const points = signal<PointView[]>([]);
/** Ids of rows whose energy could not be understood. */
export const unread = signal<ReadonlySet<string>>(new Set());
export const atCursor = signal<CursorView | null>(null);
export const fit = signal<FitView | null>(null);
/** The fit before the last change of the data, to show what the new point did. */
export const fitBefore = signal<FitView | null>(null);
/** Why there is no fit, in the core's words. */
export const fitRefused = signal("");
export const fitting = signal(false);
/** Failure of the machinery itself (not of an input); with what can be done. */
export const broken = signal("");
/** The curve on the screen is older than the sheet, long enough to be worth a word. */
export const computing = signal(false);

const byPath = computed(() => {
  const map = new Map<string, Refusal>();
  for (const problem of problems.value) if (!map.has(problem.field)) map.set(problem.field, problem);
  return map;
});

/** What is wrong with one field, if anything. */
export function problemAt(path: string): Refusal | undefined {
  return byPath.value.get(path);
}

const pointsById = computed(() => new Map(points.value.map((point) => [point.id, point])));

/** What the chain made of a row, if anything. */
export function pointOf(id: string): PointView | null {
  return pointsById.value.get(id) ?? null;
}

/** The row that is running now, if one is. */
export const runningPoint = computed(() => points.value.find((point) => point.running) ?? null);

/** A column of the curve by its name in small letters. */
export function column(name: string): Float64Array | null {
  return curve.value?.columns.find((entry) => entry.name.toLowerCase() === name)?.values ?? null;
}
