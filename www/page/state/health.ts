/** What is off: one list, shown as a stripe as long as it is not empty. */
import { computed, signal } from "@preact/signals";
import { ago } from "../format/number";
import * as answers from "./answers";
import { saveTrouble } from "./saved";
import { rows, sheet } from "./sheet";

/** Time of day, moved on every ten seconds; everything that ages reads it. */
export const now = signal(Date.now());

/** Starts the clock; returns what stops it. */
export function keepTime(): () => void {
  const timer = setInterval(() => (now.value = Date.now()), 10_000);
  return () => clearInterval(timer);
}

/** One thing that is off. */
export interface Note {
  code: string;
  message: string;
}

/** Older than a shift, a calibration is worth a look (common practice, no source). */
const STALE_MS = 12 * 3600e3;
/** Below this a running point is worth a second look (common practice, no source). */
const SUSPICIOUS_P = 0.01;

const calibratedAt = computed<number | null>(() => {
  const at = sheet.value.beam.calibration.at;
  const time = at ? Date.parse(at) : Number.NaN;
  return Number.isNaN(time) ? null : time;
});

/** Age of the calibration in words. */
export const calibrationAge = computed(() => {
  if (calibratedAt.value === null) return "never calibrated";
  return `calibrated ${ago(now.value - calibratedAt.value)}`;
});

/** Inputs of the tie between dial and true W, for "why this number". */
export const calibration = computed<[string, string][]>(() => {
  const { at, offset, slope, note } = sheet.value.beam.calibration;
  return [
    ["Offset b", offset || "0"],
    ["Slope a", slope || "0"],
    ["Calibrated", at ? `${at} (${ago(now.value - (calibratedAt.value ?? 0))})` : "never"],
    ["How", note || "not said"],
  ];
});

/** Rows of which no energy is understood: they are neither drawn nor fitted. */
const unread = computed(() => {
  const ids = rows.value.filter((row) => !row.left_out && answers.unread.value.has(row.id)).map((row) => row.id);
  if (ids.length === 0) return "";
  return `${ids.slice(0, 6).join(", ")}${ids.length > 6 ? ` and ${ids.length - 6} more` : ""}`;
});

const anyOnline = computed(() => rows.value.some((row) => !row.left_out && row.luminosity_source === "online"));

/** All that is off now. */
export const needsAttention = computed<Note[]>(() => {
  const notes: Note[] = [];
  if (answers.broken.value !== "") {
    notes.push({
      code: "engine",
      message: answers.broken.value,
    });
  }
  if (saveTrouble.value !== "") notes.push({ code: "saving", message: saveTrouble.value });
  const at = calibratedAt.value;
  if (!sheet.value.invented && at !== null && now.value - at > STALE_MS) {
    notes.push({ code: "calibration", message: `The energy was last calibrated ${ago(now.value - at)}.` });
  }
  const running = answers.runningPoint.value;
  if (running?.p !== null && running !== null && running.p < SUSPICIOUS_P) {
    notes.push({
      code: "p-value",
      message: `${running.id}: a count this far from the expected one comes about by chance in ${(running.p * 100).toPrecision(1)} % of cases.`,
    });
  }
  for (const parameter of answers.fit.value?.parameters ?? []) {
    if (parameter.atLimit) {
      notes.push({ code: "limit", message: `${parameter.name} stands at the edge of what is allowed; its error means little.` });
    }
  }
  if (unread.value !== "") {
    notes.push({ code: "unread", message: `No energy can be read for ${unread.value}: neither drawn nor fitted. Type the setting or W with its unit.` });
  }
  if (answers.problems.value.length === 0 && sheet.value.beam.spread.kind === "none" && sheet.value.data.stage !== "born") {
    notes.push({ code: "spread", message: "No spread is entered: the beams are taken as sharp." });
  }
  if (anyOnline.value) {
    notes.push({ code: "online", message: "Some points use the online luminosity." });
  }
  for (const warning of [...answers.warnings.value, ...(answers.fit.value?.warnings ?? [])]) {
    if (!notes.some((note) => note.message === warning.message)) notes.push(warning);
  }
  return notes;
});
