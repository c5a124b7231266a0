/** The one energy axis: what part of it is seen, and where the cursor stands. Energies in GeV. */
import { computed, signal } from "@preact/signals";

/** A stretch of the axis. */
export interface Range {
  from: number;
  to: number;
}

/** The whole range worth looking at: data, hypothesis, or both. */
export const whole = signal<Range>({ from: 0, to: 1 });
const zoomed = signal<Range | null>(null);

/** What is seen now. */
export const view = computed<Range>(() => zoomed.value ?? whole.value);
/** Whether the axis is zoomed in or out. */
export const isZoomed = computed(() => zoomed.value !== null);

/** Where a person has put the cursor; `null`: nowhere. */
export const cursor = signal<number | null>(null);

/** Narrowest stretch, relative to its energy: beyond it the digits of W end. */
const NARROWEST = 1e-9;

/** Shows a stretch. */
export function show(range: Range): void {
  const middle = (range.from + range.to) / 2;
  if (!(range.to - range.from > middle * NARROWEST) || !(range.from > 0)) return;
  zoomed.value = range;
}

/** Shows everything. */
export function showAll(): void {
  zoomed.value = null;
}

/** Zooms by a factor around an energy. */
export function zoomAt(w: number, factor: number): void {
  const { from, to } = view.value;
  show({ from: w - (w - from) * factor, to: w + (to - w) * factor });
}

/** Moves the stretch by a share of its length. */
export function slide(share: number): void {
  const { from, to } = view.value;
  const by = (to - from) * share;
  show({ from: from + by, to: to + by });
}
