/** How this person likes the page: kept apart from the sheet, and never needed to read one. */
import { computed, effect, signal } from "@preact/signals";

/** Themes; "" follows the system. */
export type Theme = "" | "light" | "dark" | "dim";
/** Rooms beside the axis, in the order of the work. */
export type Room = "shift" | "beam" | "model" | "detection" | "fit" | "plan" | "look-up" | "sheet";

const KEY = "widthwise.prefs.1";

interface Prefs {
  theme: Theme;
  lanes: Record<string, boolean>;
  laneHeights: Record<string, number>;
  traces: Record<string, boolean>;
  allColumns: boolean;
  guided: boolean;
  everything: boolean;
}

function stored(): Partial<Prefs> {
  try {
    const text = localStorage.getItem(KEY);
    const value: unknown = text === null ? {} : JSON.parse(text);
    return value !== null && typeof value === "object" ? value : {};
  } catch {
    return {};
  }
}

const first = stored();

export const theme = signal<Theme>(
  first.theme === "light" || first.theme === "dark" || first.theme === "dim" ? first.theme : "",
);
export const room = signal<Room>("shift");
/** Whether the read-out shows everything it knows. */
export const everything = signal(first.everything === true);
/** Whether the first steps are shown. */
export const guided = signal(first.guided !== false);
/** Whether the table shows every column in use. */
export const allColumns = signal(first.allColumns === true);
/** Lanes that are shown, by id; absent = the lane's own default. */
export const lanes = signal<Record<string, boolean>>(only(first.lanes, "boolean"));
/** Heights that a person has given to lanes, CSS pixels, by id. */
export const laneHeights = signal<Record<string, number>>(only(first.laneHeights, "number"));
/** Traces of the line-shape lane that are shown. */
export const traces = signal<Record<string, boolean>>({
  observed: true,
  radiated: true,
  born: false,
  parts: false,
  ...only(first.traces, "boolean"),
});

function only<K extends "boolean" | "number">(value: unknown, kind: K): Record<string, K extends "boolean" ? boolean : number> {
  if (value === null || typeof value !== "object") return {};
  return Object.fromEntries(Object.entries(value).filter((entry) => typeof entry[1] === kind));
}

const system = matchMedia("(prefers-color-scheme: dark)");
const dark = signal(system.matches);
system.addEventListener("change", (event) => (dark.value = event.matches));

/** How the page looks now: the chosen theme, or the system's. Applied before anything that reads it draws. */
export const look = computed(() => (theme.value !== "" ? theme.value : dark.value ? "dark" : "light"));

/** Applies and keeps the preferences; where storage is forbidden they last as long as the page. */
export function keepPrefs(): () => void {
  return effect(() => {
    document.documentElement.dataset["theme"] = look.value;
    const prefs: Prefs = {
      theme: theme.value,
      lanes: lanes.value,
      laneHeights: laneHeights.value,
      traces: traces.value,
      allColumns: allColumns.value,
      guided: guided.value,
      everything: everything.value,
    };
    try {
      localStorage.setItem(KEY, JSON.stringify(prefs));
    } catch {
      // Forbidden or full storage: nothing that was typed is here.
    }
  });
}
