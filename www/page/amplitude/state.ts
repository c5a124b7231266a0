/** What the amplitude view asks and knows; it asks only while it is open. */
import { computed, effect, signal } from "@preact/signals";
import { Refused } from "../bridge/failures";
import type { Column, Reply } from "../../shared/protocol";
import { kindOf } from "../model/kinds";
import { atCursor, broken } from "../state/answers";
import { Line } from "../state/line";
import { sheet } from "../state/sheet";
import type { Body, Request } from "../state/types";
import { cursor, placed, view } from "../state/view";
import { ask, withoutRows } from "../state/work";

/** An answer of one kind with its columns. */
export type Answer<K extends Body["kind"]> = Extract<Body, { kind: K }> & { columns_: readonly Column[] };

/** Which propagator, counted from 0. */
export const of = signal(0);
/** Chosen sheet of the complex plane; `null`: next to the real axis at M. */
export const signs = signal<boolean[] | null>(null);
/** cos θ of the slice against W, and of the drawn diagrams. */
export const cos = signal(0.3);
/** dσ/dcos instead of |M|². */
export const asCrossSection = signal(true);

export const line = signal<Answer<"amplitude"> | null>(null);
export const plane = signal<Answer<"image"> | null>(null);
export const image = signal<Answer<"image"> | null>(null);
export const alongCos = signal<Answer<"slice"> | null>(null);
export const alongW = signal<Answer<"slice"> | null>(null);
export const waves = signal<Answer<"partial_waves"> | null>(null);
/** Why there is no amplitude, in the core's words. */
export const refused = signal("");

/** Where the slices and the partial waves are taken, GeV. */
export const here = computed(() => cursor.value ?? atCursor.value?.w ?? (view.value.from + view.value.to) / 2);
/** Whether the hypothesis has angles. */
export const angular = computed(() => {
  const kind = kindOf(sheet.value);
  return kind === "diagrams" || kind === "waves";
});

/** A column of an answer by name. */
export function column(answer: { columns_: readonly Column[] } | null, name: string): Float64Array | null {
  return answer?.columns_.find((entry) => entry.name === name)?.values ?? null;
}

/** Energies of the lines. */
const ENERGIES = 500;
/** Sides of an image while something moves, and once it rests. */
const COARSE = { w: 100, cos: 75 };
const FINE = { w: 400, cos: 300 };
/** The hand rests when nothing has come for so long, ms. */
const REST_MS = 120;

/** Keeps the answers up to date; returns what stops it. */
export function watch(): () => void {
  const queue = new Line<Request, Reply>({ ask: (request) => ask(request) }, ["line", "cos", "w", "image", "plane"]);
  const later = new Line<Request, Reply>({ ask: (request) => ask(request) }, ["image", "plane", "waves"]);
  const put = <K extends Body["kind"]>(on: Line<Request, Reply>, sort: string, request: Request, kind: K, into: { value: Answer<K> | null }): void => {
    on.put(
      sort,
      request,
      ({ body, columns }) => {
        if (body.kind === kind) into.value = { ...body, columns_: columns } as unknown as Answer<K>;
        if (kind === "amplitude") refused.value = "";
      },
      (reason) => {
        into.value = null;
        if (!(reason instanceof Refused)) broken.value = String(reason);
        else if (kind === "amplitude") refused.value = reason.message;
      },
    );
  };
  const stops = [
    effect(() => {
      if (!placed.value) return;
      const { from, to } = view.value;
      put(queue, "line", { kind: "amplitude", sheet: withoutRows(sheet.value), of: of.value, grid: { from, to, places: ENERGIES } }, "amplitude", line);
    }),
    effect(() => {
      if (!placed.value || !angular.value) return;
      const { from, to } = view.value;
      const now = withoutRows(sheet.value);
      put(queue, "cos", { kind: "slice", sheet: now, along: "cos", at: here.value, grid: { from: -1, to: 1, places: 201 } }, "slice", alongCos);
      put(queue, "w", { kind: "slice", sheet: now, along: "w", at: cos.value, grid: { from, to, places: 300 } }, "slice", alongW);
    }),
    rested((fine) => {
      if (!placed.value || !angular.value) return;
      const { from, to } = view.value;
      const size = fine ? FINE : COARSE;
      const grid = { w: { from, to, places: size.w }, cos: { from: -1, to: 1, places: size.cos } };
      put(fine ? later : queue, "image", { kind: "image", sheet: withoutRows(sheet.value), ...grid, cross_section: asCrossSection.value }, "image", image);
    }),
    rested((fine) => {
      if (!placed.value) return;
      const { from, to } = view.value;
      const size = fine ? 240 : 96;
      const half = depth.value;
      put(
        fine ? later : queue,
        "plane",
        { kind: "plane", sheet: withoutRows(sheet.value), of: of.value, signs: signs.value ?? [], re: { from, to, places: size }, im: { from: -half, to: half, places: size } },
        "image",
        plane,
      );
    }),
    rested((fine) => {
      if (!placed.value || kindOf(sheet.value) !== "diagrams") {
        waves.value = null;
        return;
      }
      const { from, to } = view.value;
      const request: Request = { kind: "partial_waves", sheet: withoutRows(sheet.value), w_gev: here.value, grid: { from, to, places: 24 } };
      if (fine) put(later, "waves", request, "partial_waves", waves);
    }),
  ];
  return () => {
    for (const stop of stops) stop();
    line.value = plane.value = image.value = alongCos.value = alongW.value = waves.value = null;
  };
}

/** Half the height of the plane shown, GeV: the poles next to the axis are in it. */
const depth = computed(() => {
  const { from, to } = view.value;
  const span = to - from;
  const near = (line.value?.poles ?? []).filter((pole) => pole.mass_gev > from && pole.mass_gev < to).map((pole) => pole.width_gev / 2);
  const deepest = near.length === 0 ? 0 : Math.max(...near);
  // In steps, so that the plane does not breathe while a width is dragged.
  return Math.min(span, Math.max(0.12 * span, 2 ** Math.ceil(Math.log2(Math.max(1.4 * deepest, 1e-12)))));
});

/** An effect that runs at once with `fine` false, and again with `fine` true once nothing has changed for a moment. */
function rested(run: (fine: boolean) => void): () => void {
  let timer = 0;
  const again = signal(0);
  let seen = 0;
  const stop = effect(() => {
    const now = again.value;
    const fine = now !== seen;
    seen = now;
    run(fine);
    clearTimeout(timer);
    if (!fine) timer = window.setTimeout(() => (again.value = again.peek() + 1), REST_MS);
  });
  return () => {
    clearTimeout(timer);
    stop();
  };
}
