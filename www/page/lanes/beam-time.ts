/** Beam time spent at each energy, and what the plan would still spend. */
import { points } from "../state/answers";
import { planned } from "../state/plan";
import type { Drawing } from "./chart";
import { drawBars } from "./marks";

const NOTHING = new Float64Array(0);

/** The lane's drawing. */
export function drawBeamTime(): Drawing {
  const spent = new Map<number, number>();
  for (const point of points.value) {
    if (point.time > 0) spent.set(point.w, (spent.get(point.w) ?? 0) + point.time);
  }
  const bars = [...spent].map(([x, y]) => ({ x, y, base: 0, solid: true }));
  for (const stop of planned.value) {
    bars.push({ x: stop.w, y: stop.hours, base: spent.get(stop.w) ?? 0, solid: false });
  }
  const high = Math.max(1, ...bars.map((bar) => bar.base + bar.y)) * 1.12;
  return { w: NOTHING, traces: [], low: 0, high, over: (plot) => drawBars(plot, bars) };
}
