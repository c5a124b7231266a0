/** Information per hour: what one more hour at each energy would bring to the goal of the plan. */
import { digits } from "../format/number";
import { plan } from "../state/plan";
import type { Drawing } from "./chart";
import { type Lane, type LaneColumn, nearest } from "./lane";

const NOTHING = new Float64Array(0);

/** The lane's drawing; empty before there is a plan. */
export function drawInformation(): Drawing {
  const [w, gain] = numbers();
  if (w === undefined || gain === undefined) return { w: NOTHING, traces: [], low: 0, high: 1 };
  const values = Array.from(gain.values);
  const high = Math.max(1e-9, ...values) * 1.1;
  return { w: w.values, traces: [{ values, colour: "--c-part-1", width: 1.75, dash: [] }], low: 0, high };
}

function numbers(): LaneColumn[] {
  const gain = plan.value?.gain ?? null;
  if (gain === null) return [];
  return [
    { name: "W", unit: "GeV", values: gain.w },
    { name: "information per hour", unit: "%", values: Array.from(gain.perHour, (value) => value * 100) },
  ];
}

export const informationLane: Lane = {
  id: "information",
  title: "Information per hour",
  unit: "%",
  size: "low",
  draw: drawInformation,
  numbers,
  there: () => plan.value?.gain != null,
  missing: "once there is a plan",
  readOut: (w) => {
    const here = nearest(numbers(), 1, w);
    return here === null ? [] : [{ name: "information per hour", text: `${digits(here, 3)} %` }];
  },
};
