/** The one energy axis: what part of it is seen, and where the cursor stands. Energies in GeV. */
import { computed, signal } from "@preact/signals";

/** A stretch of the axis. */
export interface Range {
  from: number;
  to: number;
}

/** The whole range worth looking at: data, hypothesis, or both. */
export const whole = signal<Range>({ from: 0, to: 1 });
/** Whether the range has been set from a sheet; before that there is nothing to ask a curve for. */
export const placed = computed(() => whole.value.from > 0);
/** Where most of it happens: the whole without points far off on their own. Seen first. */
export const usual = signal<Range>({ from: 0, to: 1 });
const chosen = signal<Range | null>(null);

/** What is seen now. */
export const view = computed<Range>(() => chosen.value ?? usual.value);
/** Whether something lies outside what is seen, or the axis is not as it was at first. */
export const isZoomed = computed(() => view.value.from > whole.value.from || view.value.to < whole.value.to || chosen.value !== null);

/** Where a person has put the cursor; `null`: nowhere. */
export const cursor = signal<number | null>(null);

/** Narrowest stretch, relative to its energy: beyond it the digits of W end. */
const NARROWEST = 1e-9;

/** Shows a stretch. */
export function show(range: Range): void {
  const middle = (range.from + range.to) / 2;
  if (!(range.to - range.from > middle * NARROWEST) || !(range.from > 0)) return;
  chosen.value = range;
}

/** Shows everything; once more: back to where most of it happens. */
export function showAll(): void {
  const { from, to } = view.peek();
  chosen.value = from === whole.peek().from && to === whole.peek().to ? null : whole.peek();
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
