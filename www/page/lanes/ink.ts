/** Colours from the style sheet, read when drawing so that a change of theme is followed. */

/** The value of a custom property, e.g. `--ink`, where an element stands (paper in the hand-over is always light). */
export function ink(name: string, where: Element = document.documentElement): string {
  return getComputedStyle(where).getPropertyValue(name).trim();
}

/** Font of plot labels: the page's own at a fixed small size. */
export function plotFont(): string {
  return `12px ${getComputedStyle(document.body).fontFamily}`;
}
