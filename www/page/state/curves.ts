/**
 * Curves as fast as this machine allows: while a hand moves, as many energies as fit into one frame, judged by the
 * time the last curve took; once it rests, all of them. A fine curve that is overtaken is cancelled.
 */
import { Cancelled } from "../bridge/failures";
import type { Reply } from "../../shared/protocol";
import { computing } from "./answers";
import type { Line } from "./line";
import type { Request, Sheet } from "./types";
import type { Bridge } from "./work";

/** Energies of a fine curve; a pixel or two each. */
const FINE = 700;
/** Least number of energies that still shows a shape. */
const COARSE = 80;
/** Time for one curve while something moves, ms. */
const BUDGET_MS = 24;
/** A curve that takes longer than this is announced, ms. */
const WORD_MS = 400;
/** The hand rests when nothing has come for so long, ms. */
const REST_MS = 80;

/** How many energies fit into the budget at this pace. */
export function affordable(msPerEnergy: number): number {
  return Math.max(COARSE, Math.min(FINE, Math.floor(BUDGET_MS / msPerEnergy)));
}

/** Asks for curves, coarse first where fine ones take too long. */
export class Curves {
  private pace = BUDGET_MS / FINE;
  private timer = 0;
  private fine: AbortController | null = null;
  private word = 0;

  constructor(
    private readonly bridge: Bridge,
    private readonly line: Line<Request, Reply>,
  ) {}

  /** Asks for the curve of a sheet between two energies, GeV; `done` may be called twice, coarse and fine. */
  ask(sheet: Sheet, from: number, to: number, done: (reply: Reply) => void, failed: (reason: unknown) => void): void {
    this.stop();
    // A word only when one would be waited for.
    if (this.word === 0) this.word = window.setTimeout(() => (computing.value = true), WORD_MS);
    const points = affordable(this.pace);
    const request = (energies: number): Request => ({ kind: "curve", sheet, from_gev: from, to_gev: to, points: energies });
    let begun = 0;
    this.line.put(
      "curve",
      request(points),
      (reply) => {
        this.pace = Math.max(1e-4, (performance.now() - begun) / points);
        this.arrived();
        done(reply);
      },
      (reason) => {
        this.arrived();
        failed(reason);
      },
      () => {
        begun = performance.now();
      },
    );
    if (points >= FINE) return;
    this.timer = window.setTimeout(() => {
      const own = new AbortController();
      this.fine = own;
      this.bridge.run(request(FINE), { signal: own.signal }).then(
        (reply) => {
          if (!own.signal.aborted) done(reply);
        },
        (reason: unknown) => {
          if (!own.signal.aborted && !(reason instanceof Cancelled)) failed(reason);
        },
      );
    }, REST_MS);
  }

  private arrived(): void {
    clearTimeout(this.word);
    this.word = 0;
    computing.value = false;
  }

  /** Cancels a fine curve that is still wanted. */
  stop(): void {
    clearTimeout(this.timer);
    this.fine?.abort();
    this.fine = null;
  }
}
