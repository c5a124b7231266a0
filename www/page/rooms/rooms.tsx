/** The rooms beside the axis: one is open, all are one gesture away, in the order of the work. */
import type { JSX } from "preact";
import { room, type Room } from "../state/prefs";
import { BeamRoom } from "./beam";
import { DetectionRoom } from "./detection";
import { FitRoom } from "./fit";
import { LookUpRoom } from "./look-up";
import { ModelRoom } from "./model";
import { PlanRoom } from "./plan";
import { SheetRoom } from "./sheet";
import { ShiftRoom } from "./shift";

const ROOMS: readonly (readonly [Room, string, () => JSX.Element])[] = [
  ["shift", "Shift", ShiftRoom],
  ["beam", "Beam", BeamRoom],
  ["model", "Model", ModelRoom],
  ["detection", "Detection", DetectionRoom],
  ["fit", "Fit", FitRoom],
  ["plan", "Plan", PlanRoom],
  ["look-up", "Look up", LookUpRoom],
  ["sheet", "Sheet", SheetRoom],
];

/** The open room under its row of doors. */
export function Rooms(): JSX.Element {
  const open = ROOMS.find(([key]) => key === room.value) ?? ROOMS[0];
  const [key, title, View] = open ?? (["shift", "Shift", ShiftRoom] as const);
  return (
    <aside class="rooms" aria-label="Rooms">
      <nav class="doors" aria-label="Rooms">
        {ROOMS.map(([name, text]) => (
          <button type="button" key={name} aria-current={name === key ? "page" : undefined} onClick={() => enter(name)}>
            {text}
          </button>
        ))}
      </nav>
      <div class="room" data-room={key}>
        <h2 class="unseen">{title}</h2>
        <View />
      </div>
    </aside>
  );
}

/** Opens a room; where the page is one column, the room is brought into view. */
function enter(name: Room): void {
  room.value = name;
  if (!matchMedia("(max-width: 1080px)").matches) return;
  requestAnimationFrame(() => document.querySelector(".room")?.scrollIntoView({ block: "start" }));
}
