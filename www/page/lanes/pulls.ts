/** Residuals: how many of its own errors each point lies from the curve. */
import { points } from "../state/answers";
import type { Drawing } from "./chart";
import { drawBand, drawMarks, type Mark } from "./marks";

const NOTHING = new Float64Array(0);

/** The lane's drawing. */
export function drawPulls(): Drawing {
  const marks: Mark[] = [];
  let reach = 3;
  for (const point of points.value) {
    if (point.pull === null) continue;
    reach = Math.max(reach, Math.abs(point.pull) * 1.15);
    marks.push({
      x: point.w,
      y: point.pull,
      low: Math.min(0, point.pull),
      high: Math.max(0, point.pull),
      kind: point.running ? "running" : point.used ? "used" : "out",
    });
  }
  return {
    w: NOTHING,
    traces: [],
    low: -reach,
    high: reach,
    under: (plot) => drawBand(plot, -1, 1, "--c-band"),
    over: (plot) => drawMarks(plot, marks),
  };
}
