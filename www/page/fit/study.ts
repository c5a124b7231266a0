/** A study of the fit that is asked for by a button, takes its time, and can be cancelled. Its answer outlives the room, not the sheet. */
import { computed, effect, signal, type ReadonlySignal, type Signal } from "@preact/signals";
import { Cancelled, Refused, Trapped } from "../bridge/failures";
import { openings, revision, sheet } from "../state/sheet";
import type { Sheet } from "../state/types";
import type { AskOptions } from "../state/work";

/** How far it has come: share done, and seconds that are left if it goes on like that. */
export interface Pace {
  done: number;
  total: number;
  left: number | null;
}

/** One study. */
export interface Study<T> {
  made: Signal<{ value: T; revision: number } | null>;
  running: ReadonlySignal<boolean>;
  pace: Signal<Pace | null>;
  refused: Signal<string>;
  /** Made for a sheet that has been changed since. */
  old: ReadonlySignal<boolean>;
  run(work: (now: Sheet, options: AskOptions) => Promise<T>): Promise<void>;
  cancel(): void;
}

/** A study that has not been run yet. */
export function study<T>(): Study<T> {
  const made: Study<T>["made"] = signal(null);
  const pace = signal<Pace | null>(null);
  const refused = signal("");
  const running = computed(() => pace.value !== null);
  let own: AbortController | null = null;

  const cancel = (): void => {
    own?.abort();
    own = null;
    pace.value = null;
  };

  effect(() => {
    void openings.value;
    cancel();
    made.value = null;
    refused.value = "";
  });

  return {
    made,
    pace,
    refused,
    running,
    old: computed(() => made.value !== null && made.value.revision !== revision.value),
    cancel,
    async run(work) {
      cancel();
      const mine = new AbortController();
      own = mine;
      const begun = Date.now();
      const asked = revision.peek();
      refused.value = "";
      pace.value = { done: 0, total: 0, left: null };
      try {
        const value = await work(sheet.peek(), {
          background: true,
          signal: mine.signal,
          onProgress: ({ done, total }) => {
            if (own === mine) pace.value = { done, total, left: secondsLeft(done, total, Date.now() - begun) };
          },
        });
        if (own === mine) made.value = { value, revision: asked };
      } catch (reason) {
        if (own === mine) refused.value = inWords(reason);
      } finally {
        if (own === mine) cancel();
        else mine.abort();
      }
    },
  };
}

/** Seconds that are left after `done` of `total` took `ms`; `null` before anything is done. */
export function secondsLeft(done: number, total: number, ms: number): number | null {
  return done > 0 && total > 0 ? (Math.max(0, total - done) * ms) / done / 1000 : null;
}

function inWords(reason: unknown): string {
  if (reason instanceof Cancelled) return "";
  if (reason instanceof Refused) {
    const { message, allowed } = reason.refusal;
    return allowed ? `${message} Allowed: ${allowed}.` : message;
  }
  if (reason instanceof Trapped) return `The calculation broke down and was started again (${reason.message}). Nothing typed is lost.`;
  return reason instanceof Error ? reason.message : String(reason);
}
