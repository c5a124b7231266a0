/** Beam time spent at each energy, and what the plan would still spend. */
import { computed } from "@preact/signals";
import { hours } from "../format/number";
import { points } from "../state/answers";
import { planned } from "../state/plan";
import type { Drawing } from "./chart";
import type { Lane, LaneColumn } from "./lane";
import { drawBars } from "./marks";

const NOTHING = new Float64Array(0);

/** Hours spent, by energy. */
const spent = computed<ReadonlyMap<number, number>>(() => {
  const found = new Map<number, number>();
  for (const point of points.value) {
    if (point.time > 0) found.set(point.w, (found.get(point.w) ?? 0) + point.time);
  }
  return found;
});

/** The lane's drawing. */
export function drawBeamTime(): Drawing {
  const before = spent.value;
  const bars = [...before].map(([x, y]) => ({ x, y, base: 0, solid: true }));
  for (const stop of planned.value) {
    bars.push({ x: stop.w, y: stop.hours, base: before.get(stop.w) ?? 0, solid: false });
  }
  const high = Math.max(1, ...bars.map((bar) => bar.base + bar.y)) * 1.12;
  return { w: NOTHING, traces: [], low: 0, high, over: (plot) => drawBars(plot, bars) };
}

function numbers(): LaneColumn[] {
  const before = spent.value;
  const ahead = new Map<number, number>();
  for (const stop of planned.value) ahead.set(stop.w, (ahead.get(stop.w) ?? 0) + stop.hours);
  const w = [...new Set([...before.keys(), ...ahead.keys()])].sort((a, b) => a - b);
  return [
    { name: "W", unit: "GeV", values: w },
    { name: "spent", unit: "h", values: w.map((at) => before.get(at) ?? 0) },
    { name: "planned", unit: "h", values: w.map((at) => ahead.get(at) ?? 0) },
  ];
}

export const beamTimeLane: Lane = {
  id: "beam-time",
  title: "Beam time",
  unit: "h",
  size: "low",
  draw: drawBeamTime,
  numbers,
  remark: () => (planned.value.length > 0 ? "planned hatched" : ""),
  readOut: (w) => {
    const here = [...spent.value].find(([at]) => Math.abs(at - w) < 2e-6 * w);
    return here === undefined ? [] : [{ name: "time spent here", text: hours(here[1]) }];
  },
};
