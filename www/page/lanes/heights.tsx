/** How high each lane is: as much as the window has to give, until a person says otherwise. */
import type { JSX } from "preact";
import { signal } from "@preact/signals";
import { laneHeights } from "../state/prefs";
import type { Lane } from "./lane";

/** Least and largest height of a lane, CSS pixels. */
const LEAST = 72;
const MOST = 1200;
/** One press of an arrow key. */
const STEP = 16;
/** The axis' own labels below the last lane. */
export const LABELS = 26;

const tall = signal(innerHeight);
addEventListener("resize", () => (tall.value = innerHeight));

function usual(lane: Lane): number {
  const window = tall.value;
  if (lane.size === "low") return window > 1000 ? 130 : 100;
  return Math.round(innerWidth < 700 ? 260 : Math.max(240, Math.min(620, window * 0.38)));
}

/** Height of a lane without the labels of the axis. */
export function heightOf(lane: Lane): number {
  return laneHeights.value[lane.id] ?? usual(lane);
}

function set(lane: Lane, height: number | null): void {
  const { [lane.id]: _, ...rest } = laneHeights.peek();
  laneHeights.value = height === null ? rest : { ...rest, [lane.id]: Math.round(Math.min(MOST, Math.max(LEAST, height))) };
}

/** The grip at a lane's lower left: drag, arrow keys; Home or a double click: as it was. */
export function Grip({ lane }: { lane: Lane }): JSX.Element {
  const down = (event: PointerEvent): void => {
    const grip = event.currentTarget as HTMLElement;
    const [y, height] = [event.clientY, heightOf(lane)];
    grip.setPointerCapture(event.pointerId);
    const move = (next: PointerEvent): void => set(lane, height + next.clientY - y);
    const up = (): void => {
      grip.removeEventListener("pointermove", move);
      grip.removeEventListener("pointerup", up);
      grip.removeEventListener("pointercancel", up);
    };
    grip.addEventListener("pointermove", move);
    grip.addEventListener("pointerup", up);
    grip.addEventListener("pointercancel", up);
  };
  const key = (event: KeyboardEvent): void => {
    if (event.key === "ArrowDown") set(lane, heightOf(lane) + STEP);
    else if (event.key === "ArrowUp") set(lane, heightOf(lane) - STEP);
    else if (event.key === "Home") set(lane, null);
    else return;
    event.preventDefault();
  };
  return (
    <div
      class="grip"
      role="separator"
      aria-orientation="horizontal"
      tabIndex={0}
      aria-label={`Height of ${lane.title}`}
      aria-valuemin={LEAST}
      aria-valuemax={MOST}
      aria-valuenow={heightOf(lane)}
      aria-valuetext={`${heightOf(lane)} pixels`}
      title="Drag: height of the lane"
      onPointerDown={down}
      onKeyDown={key}
      onDblClick={() => set(lane, null)}
    />
  );
}
