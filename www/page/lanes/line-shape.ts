/** The line shape: what the detector would see, what made it, and what has been measured. */
import { computed } from "@preact/signals";
import { column, curve, points } from "../state/answers";
import { traces } from "../state/prefs";
import { view } from "../state/view";
import type { Drawing, Trace } from "./chart";
import { comparedCurve } from "../state/compare";
import type { Lane } from "./lane";
import { drawMarks, drawPath, type Mark } from "./marks";

/** A trace that can be shown: its key, words, colour and dash. */
export interface TraceStyle {
  key: string;
  label: string;
  colour: string;
  width: number;
  dash: number[];
}

/** The three stages of the chain; named contributions come after them. */
export const STAGES: readonly TraceStyle[] = [
  { key: "observed", label: "Observed", colour: "--c-observed", width: 2.25, dash: [] },
  { key: "radiated", label: "Radiated", colour: "--c-radiated", width: 1.5, dash: [7, 4] },
  { key: "born", label: "Born", colour: "--c-born", width: 1.5, dash: [2, 3] },
];

const PART_DASHES = [
  [10, 3, 2, 3],
  [4, 4],
  [12, 4],
  [2, 5],
];

const KNOWN = new Set(["w", ...STAGES.map((stage) => stage.key)]);

/** Contributions of the hypothesis as the curve names them. */
export function partStyles(): TraceStyle[] {
  const names = (curve.value?.columns ?? []).map((entry) => entry.name).filter((name) => !KNOWN.has(name.toLowerCase()));
  return names.map((name, i) => ({
    key: name.toLowerCase(),
    label: name,
    colour: `--c-part-${(i % 4) + 1}`,
    width: 1.25,
    dash: PART_DASHES[i % PART_DASHES.length] ?? [],
  }));
}

/** What is switched on. */
export function shownStyles(): TraceStyle[] {
  const on = traces.value;
  return [...STAGES.filter((stage) => on[stage.key] === true), ...(on["parts"] === true ? partStyles() : [])];
}

/** Marks of the measured points on the curve: made again when points change, not when the curve does. */
const dataMarks = computed<Mark[]>(() => {
  const marks: Mark[] = [];
  for (const point of points.value) {
    if (point.sigma === null) continue;
    marks.push({
      x: point.w,
      y: point.sigma,
      low: point.sigma - point.sigmaError,
      high: point.sigma + point.sigmaError,
      kind: point.running ? "running" : point.used ? "used" : "out",
      wide: point.wError,
    });
  }
  return marks;
});

/** The lane's drawing. */
export function drawLineShape(): Drawing {
  const w = curve.value?.w ?? new Float64Array(0);
  const lines: Trace[] = [];
  let low = 0;
  let high = 0;
  for (const style of shownStyles()) {
    const values = column(style.key);
    if (values === null) continue;
    const line = gaps(values);
    for (const value of line) {
      if (value === null) continue;
      if (value > high) high = value;
      if (value < low) low = value;
    }
    lines.push({ values: line, colour: style.colour, width: style.width, dash: style.dash });
  }
  const other = comparedCurve.value;
  for (const value of other?.observed ?? []) if (value > high) high = value;
  const marks = dataMarks.value;
  const { from, to } = view.value;
  for (const mark of marks) {
    if (mark.x < from || mark.x > to) continue;
    high = Math.max(high, mark.high);
    low = Math.min(low, mark.low);
  }
  if (!(high > low)) high = low + 1;
  const room = (high - low) * 0.06;
  return {
    w,
    traces: lines,
    low: low < 0 ? low - room : 0,
    high: high + room,
    over: (plot) => {
      if (other !== null) drawPath(plot, other.w, other.observed);
      drawMarks(plot, marks);
    },
  };
}

/** NaN is "nothing here": a gap in the line, not a bridge over it. */
function gaps(values: Float64Array): (number | null)[] {
  const out: (number | null)[] = new Array<number | null>(values.length);
  for (let i = 0; i < values.length; i += 1) {
    const value = values[i];
    out[i] = value === undefined || Number.isNaN(value) ? null : value;
  }
  return out;
}

export const lineShapeLane: Lane = {
  id: "line-shape",
  title: "Cross section",
  unit: "nb",
  size: "tall",
  draw: drawLineShape,
  numbers: () => {
    const shape = curve.value;
    return shape === null ? [] : [{ name: "W", unit: "GeV", values: shape.w }, ...shape.columns];
  },
  remark: () => (traces.value["observed"] === false ? "observed hidden" : ""),
};
