/** The stripe: there when something is off, and only then. */
import type { JSX } from "preact";
import { useSignal } from "@preact/signals";
import { where } from "../format/where";
import { Icon } from "../parts/icon";
import * as answers from "../state/answers";
import { openText } from "../state/files";
import { needsAttention } from "../state/health";
import { room, type Room } from "../state/prefs";
import { limits } from "../state/tables";
import { otherTab } from "../state/store";

interface Line {
  bad: boolean;
  text: string;
  path: string;
}

/** Fields that are empty and must not be, by the room where they are. */
function Needed(): JSX.Element | null {
  const empty = answers.problems.value.filter((problem) => problem.value === "");
  if (empty.length === 0) return null;
  const byRoom = new Map<Room, string[]>();
  for (const { field } of empty) {
    const key = ROOM_OF[field.split(/[.[]/)[0] ?? ""] ?? "shift";
    const names = byRoom.get(key) ?? [];
    const name = nameOf(field);
    if (!names.includes(name)) names.push(name);
    byRoom.set(key, names);
  }
  return (
    <div class="stripe stripe-quiet">
      <p>
        Still needed:{" "}
        {[...byRoom].map(([key, names], i) => (
          <span key={key}>
            {i > 0 && "; "}
            {names.slice(0, 5).join(", ")}
            {names.length > 5 && ` and ${names.length - 5} more`} in{" "}
            <button type="button" class="link" onClick={() => (room.value = key)}>
              {WORDS[key]}
            </button>
          </span>
        ))}
        .
      </p>
    </div>
  );
}

const ROOM_OF: Record<string, Room> = { beam: "beam", model: "model", detection: "detection", data: "shift", fit: "fit", plan: "plan" };
const WORDS: Partial<Record<Room, string>> = { beam: "Beam", model: "Model", detection: "Detection", shift: "Points", fit: "Fit", plan: "Plan" };

/** What the table of limits calls a field, else the last step of its path. */
function nameOf(path: string): string {
  if (path.includes(".strength.")) return "strength";
  const general = path.replace(/\[\d+\]/g, "[]");
  return limits.value.find((limit) => limit.field === general)?.name ?? where(path.split(".").at(-1) ?? path);
}

/** What is off, first line open, the rest behind one gesture; problems of the sheet before warnings. */
export function Stripe(): JSX.Element {
  const more = useSignal(false);
  // An empty field is no mistake: it is what is still to do, and is said in one line.
  const problems = answers.problems.value.filter((problem) => problem.value !== "");
  const notes = needsAttention.value;
  const lines: Line[] = [
    ...problems.map((problem) => ({ bad: true, text: problem.message, path: problem.field })),
    ...notes.map((note) => ({ bad: note.code === "engine", text: note.message, path: "" })),
  ];
  const shown = more.value ? lines : lines.slice(0, 1);
  const other = otherTab.value;
  return (
    <div class="stripe-place" role="status" aria-live="polite">
      <Needed />
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
