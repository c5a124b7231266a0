/** Where and when the sheet was last saved, in words. */
import { computed, signal } from "@preact/signals";
import { ago } from "../format/number";

/** Last save in this browser, ms since 1970; 0: none yet. */
export const savedAt = signal(0);
/** Last file it went to. */
export const savedFile = signal<{ name: string; at: number } | null>(null);
/** Changes since the last save in this browser. */
export const unsaved = signal(false);
/** What is wrong with saving, in words; "": nothing. */
export const saveTrouble = signal("");

const tick = signal(0);

/** Moves the words on as time passes. */
export function keepSavedWords(): () => void {
  const timer = setInterval(() => (tick.value += 1), 5000);
  return () => clearInterval(timer);
}

/** "In this browser, 5 s ago; in scan.json since 02:10". */
export const savedWords = computed(() => {
  void tick.value;
  const file = savedFile.value;
  const inFile = file === null ? "in no file yet" : `in ${file.name} since ${clock(file.at)}`;
  if (saveTrouble.value !== "") return `Not saved in this browser; ${inFile}`;
  if (unsaved.value) return `Saving… ${inFile}`;
  if (savedAt.value === 0) return "As opened, nothing to save";
  return `Saved in this browser only ${ago(Date.now() - savedAt.value)}; ${inFile}`.replace(
    file === null ? "" : " only",
    "",
  );
});

function clock(at: number): string {
  return new Date(at).toLocaleTimeString(undefined, { hour: "2-digit", minute: "2-digit", hourCycle: "h23" });
}
