/** Colours from the style sheet, read once for each look of the page. */
import { effect } from "@preact/signals";
import { look } from "../state/prefs";

const known = new Map<string, string>();
effect(() => {
  void look.value;
  known.clear();
});

/** The value of a custom property, e.g. `--ink`, where an element stands (paper in the hand-over is always light). */
export function ink(name: string, where: Element = document.documentElement): string {
  const theme = where.closest("[data-theme]")?.getAttribute("data-theme") ?? "";
  const key = `${theme} ${name}`;
  let value = known.get(key);
  if (value === undefined) {
    value = getComputedStyle(where).getPropertyValue(name).trim();
    known.set(key, value);
  }
  return value;
}

/** Font of plot labels: the page's own at a fixed small size. */
export function plotFont(): string {
  return `12px ${getComputedStyle(document.body).fontFamily}`;
}
