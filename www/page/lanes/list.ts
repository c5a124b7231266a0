/** The lanes there are, top to bottom. A new lane is a file that exports one and a line here. */
import { computed } from "@preact/signals";
import { lanes } from "../state/prefs";
import { beamTimeLane } from "./beam-time";
import { informationLane } from "./information";
import type { Lane } from "./lane";
import { lineShapeLane } from "./line-shape";
import { pullsLane } from "./pulls";

export const LANES: readonly Lane[] = [lineShapeLane, pullsLane, informationLane, beamTimeLane];

/** Lanes that are on the screen now. */
export const shown = computed(() => LANES.filter((lane) => wanted(lane) && (lane.there?.() ?? true)));

/** Whether a person wants to see a lane. */
export function wanted(lane: Lane): boolean {
  return lanes.value[lane.id] ?? lane.onDemand !== true;
}
