/** Keeps the answers up to date: watches sheet, axis and cursor, and asks the worker for what has become old. */
import { effect } from "@preact/signals";
import { Refused, Trapped } from "../bridge/failures";
import type { Progress, Reply } from "../../shared/protocol";
import { stage } from "../amplitude/stage";
import * as answers from "./answers";
import { readCursor, readCurve, readFit, readNoPoints, readPoints } from "./read";
import { Curves } from "./curves";
import { Line } from "./line";
import { opened, revision, sheet } from "./sheet";
import type { Request, Sheet } from "./types";
import { cursor, placed, usual, view } from "./view";

/** How a request is to be treated. */
export interface AskOptions {
  /** Long work: never takes the last worker. */
  background?: boolean;
  signal?: AbortSignal;
  onProgress?: (progress: Progress) => void;
}

/** What asks: the pool of workers, or a stand-in of a test. */
export interface Bridge {
  run(request: Request, options?: AskOptions): Promise<Reply>;
  /** How many workers there are. */
  readonly size?: number;
}

/** With more rows than this, checking them waits for the hand to rest: sending them takes longer than a frame. */
const MANY_ROWS = 500;

/** A fit starts when the sheet has been still this long, ms. */
const STILL_MS = 120;

let bridge: Bridge | null = null;

/** Asks one question outside the running work (a look-up, a file, a study of the fit). */
export function ask(request: Request, options: AskOptions = {}): Promise<Reply> {
  if (bridge === null) return Promise.reject(new Error("the engine has not started yet"));
  return bridge.run(request, options);
}

/** How many long requests can run side by side. */
export function lanesForLongWork(): number {
  return Math.max(1, (bridge?.size ?? 2) - 1);
}

/** Starts the work on a bridge; returns what stops it. */
export function work(on: Bridge): () => void {
  bridge = on;
  const live = new Line<Request, Reply>({ ask: (request) => on.run(request) }, ["curve", "cursor"]);
  const curve = new Curves(on, live);
  // Rows of data may be many: what needs them does not stand in the way of the hand.
  const steady = new Line<Request, Reply>({ ask: (request) => on.run(request) }, ["check", "points"]);
  const failed = (reason: unknown): void => {
    if (reason instanceof Refused) return;
    answers.broken.value =
      reason instanceof Trapped
        ? `The calculation broke down and was started again (${reason.message}). Nothing typed is lost.`
        : String(reason);
  };

  let resting = 0;
  const readAll = (now: Sheet): void => {
    steady.put(
      "check",
      { kind: "check", sheet: now },
      ({ body }) => {
        if (body.kind !== "sheet") return;
        if (!same(answers.problems.peek(), body.problems)) answers.problems.value = body.problems;
        if (!same(answers.warnings.peek(), body.warnings)) answers.warnings.value = body.warnings;
      },
      failed,
    );
    steady.put("points", { kind: "points", sheet: now }, (reply) => readPoints(reply, now), (reason) => {
      if (reason instanceof Refused) readNoPoints(now);
      else failed(reason);
    });
  };
  let rows = 0;
  const stops = [
    effect(() => {
      if (!opened.value) return;
      const now = sheet.value;
      clearTimeout(resting);
      // New rows are wanted at once; the same rows under a moving slider are not.
      const fresh = now.data.rows.length !== rows;
      rows = now.data.rows.length;
      // Nor do they stand in the way while the amplitude follows the hand.
      if (fresh || (rows <= MANY_ROWS && stage.value !== "amplitude")) readAll(now);
      else resting = window.setTimeout(() => readAll(now), STILL_MS);
    }),
    effect(() => {
      // Behind the amplitude nobody sees the curve, and its work would stand in the way of the hand.
      if (!opened.value || !placed.value || stage.value === "amplitude") return;
      const { from, to } = view.value;
      curve.ask(withoutRows(sheet.value), from, to, readCurve, (reason) => {
        if (reason instanceof Refused) answers.curve.value = null;
        else failed(reason);
      });
    }),
    effect(() => {
      if (!opened.value || !placed.value || stage.value === "amplitude") return;
      const w = cursor.value ?? answers.runningPoint.value?.w ?? answers.points.value.at(-1)?.w ?? middleOfInterest();
      live.put("cursor", { kind: "cursor", sheet: withoutRows(sheet.value), w_gev: w }, readCursor, (reason) => {
        if (reason instanceof Refused) answers.atCursor.value = null;
        else failed(reason);
      });
    }),
    keepFitting(on, failed),
  ];
  return () => {
    for (const stop of stops) stop();
    clearTimeout(resting);
    curve.stop();
    bridge = null;
  };
}

/** Equal lists stay the same list, so that nothing is drawn again for them. */
function same(before: readonly object[], now: readonly object[]): boolean {
  return before.length === now.length && (now.length === 0 || JSON.stringify(before) === JSON.stringify(now));
}

/**
 * A curve needs no rows; leaving them at home keeps a drag quick with ten thousand of them. One stays: the unit in
 * which its setting was typed is the unit of the number to dial.
 */
export function withoutRows(now: Sheet): Sheet {
  const { covariance: _, ...data } = now.data;
  return { ...now, data: { ...data, rows: now.data.rows.filter((row) => row.setting).slice(0, 1) } };
}

function middleOfInterest(): number {
  return (usual.value.from + usual.value.to) / 2;
}

function keepFitting(on: Bridge, failed: (reason: unknown) => void): () => void {
  let timer = 0;
  let running: AbortController | null = null;
  const stop = effect(() => {
    void revision.value;
    if (!opened.value) return;
    const now = sheet.value;
    clearTimeout(timer);
    running?.abort();
    running = null;
    if (now.fit.free.length === 0) {
      answers.fit.value = null;
      answers.fitting.value = false;
      answers.fitRefused.value = "";
      return;
    }
    answers.fitting.value = true;
    timer = window.setTimeout(() => {
      const own = new AbortController();
      running = own;
      on.run({ kind: "fit", sheet: now }, { background: true, signal: own.signal }).then(
        (reply) => {
          if (own.signal.aborted) return;
          readFit(reply, now);
          answers.fitting.value = false;
          answers.fitRefused.value = "";
        },
        (reason: unknown) => {
          if (own.signal.aborted) return;
          answers.fitting.value = false;
          answers.fit.value = null;
          if (reason instanceof Refused) answers.fitRefused.value = reason.message;
          else failed(reason);
        },
      );
    }, STILL_MS);
  });
  return () => {
    stop();
    clearTimeout(timer);
    running?.abort();
  };
}
