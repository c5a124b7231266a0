/** The one document the page shows, and every step that led to it. */
import { computed, signal } from "@preact/signals";
import type { Sheet } from "./types";
import { withAt } from "./path";

/** One step back or forward: the sheet as it was and what was done then. */
interface Past {
  sheet: Sheet;
  did: string;
}

/** Steps that are kept; older ones are in the saved versions. */
const KEPT = 500;
/** Changes to the same field closer together than this are one step (a drag, a word being typed). */
const ONE_STEP_MS = 1200;

const current = signal<Sheet | null>(null);
const past = signal<Past[]>([]);
const future = signal<Past[]>([]);
let last: { key: string; at: number } = { key: "", at: 0 };

/** The sheet; there is one from the first frame on. */
export const sheet = computed<Sheet>(() => {
  if (current.value === null) throw new Error("no sheet has been opened yet");
  return current.value;
});

/** Its rows of data; what shows only these is not drawn again when a slider moves. */
export const rows = computed(() => sheet.value.data.rows);
/** Where in the rows the running one is; -1: none is running. */
export const runningIndex = computed(() => rows.value.findIndex((row) => row.running === true));

/** Whether a sheet has been opened. */
export const opened = computed(() => current.value !== null);
/** What undo would take back, or "". */
export const undoable = computed(() => past.value.at(-1)?.did ?? "");
/** What redo would do again, or "". */
export const redoable = computed(() => future.value.at(-1)?.did ?? "");
/** How often the document has changed; also tells an answer from a stale one. */
export const revision = signal(0);
/** How often another document has been opened: what was asked of the one before is forgotten. */
export const openings = signal(0);

/** Replaces the document by another one; with `did` it can be undone. */
export function open(next: Sheet, did = ""): void {
  if (did !== "" && current.value !== null) remember(did, "");
  else {
    past.value = [];
    future.value = [];
  }
  current.value = next;
  revision.value += 1;
  openings.value += 1;
}

/** Changes the document. `did` is what a person would call it; changes with one `key` in a row are one step. */
export function change(did: string, recipe: (before: Sheet) => Sheet, key = ""): void {
  const before = sheet.peek();
  const after = recipe(before);
  if (after === before) return;
  remember(did, key);
  current.value = after;
  revision.value += 1;
}

/** Sets one field, as typed. Empty text removes an optional field (`undefined`) or stays "" where one is required. */
export function setField(path: string, value: unknown, did: string): void {
  change(did, (before) => withAt(before, path, value), path);
}

/** Takes back the last step. */
export function undo(): void {
  shift(past, future);
}

/** Does the step taken back last again. */
export function redo(): void {
  shift(future, past);
}

function remember(did: string, key: string): void {
  const now = Date.now();
  const same = key !== "" && key === last.key && now - last.at < ONE_STEP_MS && past.value.length > 0;
  last = { key, at: now };
  future.value = [];
  if (same) return;
  past.value = [...past.value.slice(1 - KEPT), { sheet: sheet.peek(), did }];
}

function shift(from: typeof past, to: typeof past): void {
  const step = from.value.at(-1);
  if (step === undefined) return;
  from.value = from.value.slice(0, -1);
  to.value = [...to.value, { sheet: sheet.peek(), did: step.did }];
  last = { key: "", at: 0 };
  current.value = step.sheet;
  revision.value += 1;
}
