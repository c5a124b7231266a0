/** The stripe: there when something is off, and only then. */
import type { JSX } from "preact";
import { useSignal } from "@preact/signals";
import { where } from "../format/where";
import { Icon } from "../parts/icon";
import * as answers from "../state/answers";
import { openText } from "../state/files";
import { needsAttention } from "../state/health";
import { otherTab } from "../state/store";

/** What is off, first line open, the rest behind one gesture; problems of the sheet before warnings. */
export function Stripe(): JSX.Element {
  const more = useSignal(false);
  const problems = answers.problems.value;
  const notes = needsAttention.value;
  const lines = [
    ...problems.map((problem) => ({ bad: true, text: problem.message, path: problem.field })),
    ...notes.map((note) => ({ bad: note.code === "engine", text: note.message, path: "" })),
  ];
  const shown = more.value ? lines : lines.slice(0, 1);
  const other = otherTab.value;
  return (
    <div class="stripe-place" role="status" aria-live="polite">
      {lines.length > 0 && (
        <div class={problems.length > 0 ? "stripe stripe-bad" : "stripe"}>
          <Icon name="warn" />
          <ul>
            {shown.map((line) => (
              <li key={line.path + line.text}>
                {line.path !== "" && <span class="where">{where(line.path)}: </span>}
                {line.text}
              </li>
            ))}
          </ul>
          {lines.length > 1 && (
            <button type="button" class="link" aria-expanded={more.value} onClick={() => (more.value = !more.value)}>
              {more.value ? "Less" : `${lines.length - 1} more`}
            </button>
          )}
        </div>
      )}
      {other !== null && (
        <div class="stripe">
          <Icon name="warn" />
          <p>
            Another tab saved “{other.title || "Untitled sheet"}” at {new Date(other.at).toLocaleTimeString(undefined, { hourCycle: "h23" })}. Both are
            kept as versions; neither overwrites the other.
          </p>
          <button type="button" class="link" onClick={() => void openText(other.text, "take the sheet of the other tab").then(() => (otherTab.value = null))}>
            Take that one here
          </button>
          <button type="button" class="link" onClick={() => (otherTab.value = null)}>
            Keep this one
          </button>
        </div>
      )}
    </div>
  );
}
