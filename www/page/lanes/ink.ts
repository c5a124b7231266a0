/** Colours from the style sheet, read when drawing so that a change of theme is followed. */

let style: CSSStyleDeclaration | null = null;

/** The value of a custom property, e.g. `--ink`. */
export function ink(name: string): string {
  style ??= getComputedStyle(document.documentElement);
  return style.getPropertyValue(name).trim();
}

/** Font of plot labels: the page's own at a fixed small size. */
export function plotFont(): string {
  return `12px ${getComputedStyle(document.body).fontFamily}`;
}
