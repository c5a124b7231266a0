/** The way through the job for somebody who has never seen the page: each step opens its room. */
import type { JSX } from "preact";
import * as answers from "../state/answers";
import { plan } from "../state/plan";
import { savedFile } from "../state/saved";
import { sheet } from "../state/sheet";
import { guided, room, type Room } from "../state/prefs";

const STEPS: readonly (readonly [Room, string, string])[] = [
  ["beam", "Beam", "who meets whom, what the dial shows, spread"],
  ["model", "Model", "mass, width and strength that you believe in; drag them and watch the curve"],
  ["detection", "Detection", "efficiency and background, so that counts can be expected"],
  ["plan", "Plan", "where to stand, and for how long"],
  ["shift", "Shift", "start a point; enter counts and luminosity as they come"],
  ["fit", "Fit", "mass and width with their errors, after every point by itself"],
  ["sheet", "Sheet", "the hand-over page, the file, the log text"],
];

/** Whether a step has been taken, as far as the page can tell. */
function done(step: Room): boolean {
  const now = sheet.value;
  const sound = !answers.problems.value.some((problem) => problem.field.startsWith(step));
  switch (step) {
    case "beam":
      return sound && now.beam.spread.kind !== "none";
    case "model":
      return sound;
    case "detection":
      return sound && Boolean(now.detection.efficiency);
    case "plan":
      return plan.value !== null;
    case "shift":
      return now.data.rows.length > 0;
    case "fit":
      return answers.fit.value !== null;
    default:
      return savedFile.value !== null;
  }
}

/** The list, until it is put away. */
export function FirstSteps(): JSX.Element | null {
  if (!guided.value) return null;
  return (
    <section class="first-steps" aria-labelledby="first-steps">
      <h3 id="first-steps">From an idea to a peak</h3>
      <ol>
        {STEPS.map(([key, name, what]) => (
          <li key={key} class={done(key) ? "done" : ""}>
            <button type="button" class="link" onClick={() => (room.value = key)}>
              {name}
            </button>
            {done(key) && <span class="unseen"> (done)</span>}
            <span class="note"> {what}</span>
          </li>
        ))}
      </ol>
      <p class="note">
        {sheet.value.invented
          ? "What you see is invented and finished. Change anything: undo takes it back. A new sheet is in "
          : "Change anything: undo takes it back. Examples to look at are in "}
        <button type="button" class="link" onClick={() => (room.value = "sheet")}>
          Sheet
        </button>
        .
      </p>
      <button type="button" class="button" onClick={() => (guided.value = false)}>
        Put this away
      </button>
    </section>
  );
}
