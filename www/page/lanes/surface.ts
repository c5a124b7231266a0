/** What marks are drawn on: a canvas on the screen, or an SVG that is taken away. Only what both can do. */

/** The part of a canvas' context that lanes use. */
export interface Pen {
  strokeStyle: string | CanvasGradient | CanvasPattern;
  fillStyle: string | CanvasGradient | CanvasPattern;
  lineWidth: number;
  lineJoin: CanvasLineJoin;
  save(): void;
  restore(): void;
  beginPath(): void;
  closePath(): void;
  moveTo(x: number, y: number): void;
  lineTo(x: number, y: number): void;
  arc(x: number, y: number, radius: number, from: number, to: number): void;
  rect(x: number, y: number, width: number, height: number): void;
  clip(): void;
  stroke(): void;
  fill(): void;
  fillRect(x: number, y: number, width: number, height: number): void;
  strokeRect(x: number, y: number, width: number, height: number): void;
  setLineDash(dash: number[]): void;
}

/** A lane's plot as its marks see it (a uPlot is one); lengths in device pixels. */
export interface Surface {
  ctx: Pen;
  /** The inner box. */
  bbox: { left: number; top: number; width: number; height: number };
  /** Where the colours are taken from. */
  root: Element;
  valToPos(value: number, scale: string, device?: boolean): number;
}
