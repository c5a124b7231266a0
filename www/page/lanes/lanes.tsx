/** Stacked lanes over the one energy axis, with one cursor through all of them. */
import type { JSX } from "preact";
import { useLayoutEffect, useRef } from "preact/hooks";
import { useSignal } from "@preact/signals";
import { axisScale } from "../format/number";
import { Icon } from "../parts/icon";
import { laneHeights, lanes } from "../state/prefs";
import * as answers from "../state/answers";
import { atCursor, curve, points } from "../state/answers";
import { cursor, isZoomed, showAll, slide, view, zoomAt } from "../state/view";
import { GUTTER, MARGIN, shareOf } from "./axis";
import { AsTable } from "./as-table";
import { Chart } from "./chart";
import { Grip, heightOf, LABELS } from "./heights";
import type { Lane } from "./lane";
import { Legend } from "./legend";
import { LANES, shown, wanted } from "./list";
import { listen, marked } from "./pointer";
import { ReadOut, readOutText } from "./read-out";

/** The lanes with their controls. */
export function Lanes(): JSX.Element {
  const box = useRef<HTMLDivElement>(null);
  useLayoutEffect(() => (box.current === null ? undefined : listen(box.current)), []);
  const { from, to } = view.value;
  return (
    <section class="lanes" aria-labelledby="lanes-title">
      <div class="lanes-bar">
        <h2 id="lanes-title" class="unseen">
          Scan
        </h2>
        <Legend />
        <div class="tools" role="group" aria-label="Energy axis">
          <button type="button" class="tool" aria-label="Zoom out" onClick={() => zoomAt((from + to) / 2, 1.6)}>
            <Icon name="minus" />
          </button>
          <button type="button" class="tool" aria-label="Zoom in" onClick={() => zoomAt((from + to) / 2, 1 / 1.6)}>
            <Icon name="plus" />
          </button>
          <button type="button" class="tool" aria-label="Whole scan" disabled={!isZoomed.value} onClick={showAll}>
            <Icon name="whole" />
          </button>
        </div>
      </div>
      <ReadOut />
      <div class="lanes-box" ref={box}>
        {shown.value.map((lane, i, all) => (
          <LaneView key={lane.id} lane={lane} last={i === all.length - 1} />
        ))}
        <Cursor />
        {curve.value === null && (
          <p class="lanes-empty">
            {answers.problems.value.length === 0 ? "…" : "No curve yet. It appears as soon as beams, mass, width and strength are given."}
          </p>
        )}
      </div>
      <div class="axis-foot">
        <Outside side="left" />
        <p class="axis-name" aria-hidden="true">
          <span class="sym">W</span> ({axisScale(from, to).unit})
        </p>
        <Outside side="right" />
      </div>
      <div class="lanes-foot">
        <LaneChoice />
        <AsTable shown={shown.value} />
      </div>
    </section>
  );
}

/** Says how many points lie outside what is seen; brings them in. */
function Outside({ side }: { side: "left" | "right" }): JSX.Element {
  const { from, to } = view.value;
  const count = points.value.filter((point) => (side === "left" ? point.w < from : point.w > to)).length;
  if (count === 0) return <span />;
  const what = count === 1 ? "1 point" : `${count} points`;
  return (
    <button type="button" class="link outside" onClick={showAll} aria-label={`${what} outside to the ${side}: show the whole scan`}>
      {side === "left" ? `← ${what}` : `${what} →`}
    </button>
  );
}

function LaneView({ lane, last }: { lane: Lane; last: boolean }): JSX.Element {
  const remark = lane.remark?.() ?? "";
  return (
    <figure class="lane" data-lane={lane.id}>
      <figcaption>
        {lane.title} <span class="quiet">({lane.unit})</span>
        {remark !== "" && <span class="quiet"> · {remark}</span>}
      </figcaption>
      <Chart height={heightOf(lane) + (last ? LABELS : 0)} labelled={last} draw={lane.draw} />
      <Grip lane={lane} />
    </figure>
  );
}

/** The cursor line; a slider for the keyboard and for whoever listens to the page. */
function Cursor(): JSX.Element {
  const range = view.value;
  const w = cursor.value ?? atCursor.value?.w ?? null;
  const share = w === null ? -1 : shareOf(w, range);
  const stretch = marked.value;
  const onKeyDown = (event: KeyboardEvent): void => {
    const step = (range.to - range.from) * (event.shiftKey ? 0.05 : 0.0025);
    const here = w ?? (range.from + range.to) / 2;
    const keys: Record<string, () => void> = {
      ArrowRight: () => (cursor.value = here + step),
      ArrowLeft: () => (cursor.value = here - step),
      ArrowUp: () => (cursor.value = neighbour(here, 1)),
      ArrowDown: () => (cursor.value = neighbour(here, -1)),
      Home: () => (cursor.value = range.from),
      End: () => (cursor.value = range.to),
      "+": () => zoomAt(here, 1 / 1.6),
      "=": () => zoomAt(here, 1 / 1.6),
      "-": () => zoomAt(here, 1.6),
      PageUp: () => slide(0.5),
      PageDown: () => slide(-0.5),
      "0": showAll,
      Escape: () => (cursor.value = null),
    };
    const act = keys[event.key];
    if (act === undefined || event.ctrlKey || event.metaKey || event.altKey) return;
    event.preventDefault();
    act();
  };
  return (
    <div class="overlay" style={{ left: `${GUTTER}px`, right: `${MARGIN}px` }}>
      {stretch !== null && (
        <div
          class="stretch"
          style={{ left: `${stretch.from * 100}%`, width: `${(stretch.to - stretch.from) * 100}%` }}
        />
      )}
      <div
        class={cursor.value === null ? "cursor cursor-rest" : "cursor"}
        role="slider"
        tabIndex={0}
        aria-label="Cursor on the energy axis"
        aria-valuemin={range.from}
        aria-valuemax={range.to}
        aria-valuenow={w ?? range.from}
        aria-valuetext={readOutText()}
        hidden={share < 0 || share > 1}
        style={{ left: `${share * 100}%` }}
        onKeyDown={onKeyDown}
      />
    </div>
  );
}

/** The measured point next to an energy, up or down the axis. */
function neighbour(w: number, way: 1 | -1): number {
  const ahead = points
    .peek()
    .map((point) => point.w)
    .filter((other) => (other - w) * way > 1e-9)
    .sort((a, b) => (a - b) * way);
  return ahead[0] ?? w;
}

function LaneChoice(): JSX.Element {
  const open = useSignal(false);
  return (
    <div class="lane-choice">
      <button type="button" class="link" aria-expanded={open.value} onClick={() => (open.value = !open.value)}>
        Lanes
      </button>
      {open.value &&
        LANES.map((lane) => (
          <label class="switch" key={lane.id}>
            <input
              type="checkbox"
              checked={wanted(lane)}
              onChange={(event) => {
                lanes.value = { ...lanes.value, [lane.id]: event.currentTarget.checked };
              }}
            />
            <span>
              {lane.title}
              {lane.there?.() === false && lane.missing && <span class="note"> {lane.missing}</span>}
            </span>
          </label>
        ))}
      {open.value && Object.keys({ ...lanes.value, ...laneHeights.value }).length > 0 && (
        <button
          type="button"
          class="link"
          onClick={() => {
            lanes.value = {};
            laneHeights.value = {};
          }}
        >
          As at first
        </button>
      )}
    </div>
  );
}
