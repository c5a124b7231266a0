/** Information per hour: what one more hour at each energy would bring to the goal of the plan. */
import { plan } from "../state/plan";
import type { Drawing } from "./chart";

const NOTHING = new Float64Array(0);

/** The lane's drawing; empty before there is a plan. */
export function drawInformation(): Drawing {
  const gain = plan.value?.gain ?? null;
  if (gain === null) return { w: NOTHING, traces: [], low: 0, high: 1 };
  const percent = Array.from(gain.perHour, (value) => value * 100);
  const high = Math.max(1e-9, ...percent) * 1.1;
  return { w: gain.w, traces: [{ values: percent, colour: "--c-part-1", width: 1.75, dash: [] }], low: 0, high };
}
