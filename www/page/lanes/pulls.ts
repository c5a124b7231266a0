/** Residuals: how many of its own errors each point lies from the curve. */
import { computed } from "@preact/signals";
import { signed } from "../format/number";
import { points } from "../state/answers";
import type { Drawing } from "./chart";
import type { Lane } from "./lane";
import { drawBand, drawMarks, type Mark } from "./marks";

const NOTHING = new Float64Array(0);

const made = computed(() => {
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
  return { marks, reach };
});

/** The lane's drawing. */
export function drawPulls(): Drawing {
  const { marks, reach } = made.value;
  return {
    w: NOTHING,
    traces: [],
    low: -reach,
    high: reach,
    under: (plot) => drawBand(plot, -1, 1, "--c-band"),
    over: (plot) => drawMarks(plot, marks),
  };
}

export const pullsLane: Lane = {
  id: "pulls",
  title: "Residuals",
  unit: "errors",
  size: "low",
  draw: drawPulls,
  numbers: () => {
    const shown = points.value.filter((point) => point.pull !== null).sort((a, b) => a.w - b.w);
    return [
      { name: "W", unit: "GeV", values: shown.map((point) => point.w) },
      { name: "residual", unit: "errors", values: shown.map((point) => point.pull ?? Number.NaN) },
    ];
  },
  readOut: (w) =>
    points.value
      .filter((point) => point.pull !== null && Math.abs(point.w - w) < 2e-6 * w)
      .map((point) => ({ name: `residual of ${point.id}`, text: `${signed(point.pull ?? 0, 2)} errors` })),
};
