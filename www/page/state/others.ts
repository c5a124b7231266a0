/** Whether other parameter sets describe the data as well: looked for by itself after every fit, in the background. */
import { computed, effect, signal } from "@preact/signals";
import * as answers from "./answers";
import { revision, sheet } from "./sheet";
import type { Body } from "./types";
import { ask } from "./work";

type Found = Extract<Body, { kind: "solutions" }>;

/** Below that difference in 2 NLL the data do not tell two solutions apart (one standard deviation). */
const NOT_TOLD_APART = 1;
/** The sheet must have been still so long, ms. */
const STILL_MS = 700;
/** Where they cannot be constructed they are searched for; longer than this only when asked for in Fit, ms. */
const PATIENCE_MS = 4000;

const found = signal<{ body: Found; revision: number } | null>(null);

/** The other solutions that describe the data as well as the best one; `null`: not known (yet). */
export const otherSolutions = computed<Found["solutions"] | null>(() => {
  const last = found.value;
  if (last === null || last.revision !== revision.value) return null;
  return last.body.solutions.filter((solution) => solution.above_best < NOT_TOLD_APART).slice(1);
});

/** What would tell them apart, in the core's words. */
export const whatSeparates = computed(() => found.value?.body.note ?? "");

/** Keeps looking; returns what stops it. */
export function keepLookingForOthers(): () => void {
  let timer = 0;
  let own: AbortController | null = null;
  const drop = (): void => {
    clearTimeout(timer);
    own?.abort();
    own = null;
  };
  const stop = effect(() => {
    const fit = answers.fit.value;
    const asked = revision.value;
    drop();
    if (fit === null || !fit.converged || answers.fitting.value) return;
    const now = sheet.peek();
    timer = window.setTimeout(() => {
      const mine = new AbortController();
      own = mine;
      timer = window.setTimeout(() => mine.abort(), PATIENCE_MS);
      ask({ kind: "solutions", sheet: now }, { background: true, signal: mine.signal }).then(
        ({ body }) => {
          if (!mine.signal.aborted && body.kind === "solutions") found.value = { body, revision: asked };
          clearTimeout(timer);
        },
        // Refused, cancelled, given up: then nothing is known, and nothing is said.
        () => undefined,
      );
    }, STILL_MS);
  });
  return () => {
    stop();
    drop();
  };
}
