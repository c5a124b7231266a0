/** Writes as SVG what marks draw: the same strokes as on the canvas, as shapes that stay sharp in a paper. */
import type { Pen } from "./surface";

/** One number of a path: a hundredth of a pixel is enough. */
function n(value: number): string {
  return String(Math.round(value * 100) / 100);
}

/** Text that may stand in an attribute or between tags. */
export function escaped(text: string): string {
  return text.replace(/[&<>"]/g, (sign) => `&#${sign.charCodeAt(0)};`);
}

interface State {
  strokeStyle: Pen["strokeStyle"];
  fillStyle: Pen["fillStyle"];
  lineWidth: number;
  lineJoin: CanvasLineJoin;
  dash: number[];
  clip: string;
}

/** A pen whose strokes are collected as text. Clips are rectangles, as the lanes use them. */
export class SvgPen implements Pen {
  strokeStyle: Pen["strokeStyle"] = "#000";
  fillStyle: Pen["fillStyle"] = "#000";
  lineWidth = 1;
  lineJoin: CanvasLineJoin = "miter";
  private dash: number[] = [];
  private clipped = "";
  private path = "";
  private readonly kept: State[] = [];
  private readonly parts: string[] = [];
  private clips = 0;

  /** `name`: tells the clips of one pen from another's in the same picture. */
  constructor(private readonly name: string) {}

  /** All strokes so far. */
  text(): string {
    return this.parts.join("\n");
  }

  save(): void {
    const { strokeStyle, fillStyle, lineWidth, lineJoin, dash, clipped } = this;
    this.kept.push({ strokeStyle, fillStyle, lineWidth, lineJoin, dash, clip: clipped });
  }

  restore(): void {
    const last = this.kept.pop();
    if (last === undefined) return;
    const { clip, ...rest } = last;
    Object.assign(this, rest);
    this.clipped = clip;
  }

  beginPath(): void {
    this.path = "";
  }

  closePath(): void {
    this.path += "Z";
  }

  moveTo(x: number, y: number): void {
    if (Number.isFinite(x) && Number.isFinite(y)) this.path += `M${n(x)} ${n(y)}`;
  }

  lineTo(x: number, y: number): void {
    if (Number.isFinite(x) && Number.isFinite(y)) this.path += `${this.path === "" ? "M" : "L"}${n(x)} ${n(y)}`;
  }

  arc(x: number, y: number, radius: number): void {
    const r = n(radius);
    this.path += `M${n(x + radius)} ${n(y)}A${r} ${r} 0 1 1 ${n(x - radius)} ${n(y)}A${r} ${r} 0 1 1 ${n(x + radius)} ${n(y)}`;
  }

  rect(x: number, y: number, width: number, height: number): void {
    this.path += `M${n(x)} ${n(y)}h${n(width)}v${n(height)}h${n(-width)}Z`;
  }

  clip(): void {
    this.clips += 1;
    const id = `${this.name}-${this.clips}`;
    this.parts.push(`<clipPath id="${id}"><path d="${this.path}"/></clipPath>`);
    this.clipped = ` clip-path="url(#${id})"`;
  }

  setLineDash(dash: number[]): void {
    this.dash = dash;
  }

  stroke(): void {
    if (this.path === "") return;
    const dash = this.dash.length > 0 ? ` stroke-dasharray="${this.dash.map(n).join(" ")}"` : "";
    this.parts.push(`<path d="${this.path}" fill="none" stroke="${escaped(String(this.strokeStyle))}" stroke-width="${n(this.lineWidth)}" stroke-linejoin="${this.lineJoin}"${dash}${this.clipped}/>`);
  }

  fill(): void {
    if (this.path !== "") this.parts.push(`<path d="${this.path}" fill="${escaped(String(this.fillStyle))}"${this.clipped}/>`);
  }

  fillRect(x: number, y: number, width: number, height: number): void {
    const before = this.path;
    this.path = "";
    this.rect(x, y, width, height);
    this.fill();
    this.path = before;
  }

  strokeRect(x: number, y: number, width: number, height: number): void {
    const before = this.path;
    this.path = "";
    this.rect(x, y, width, height);
    this.stroke();
    this.path = before;
  }

  /** A word; `anchor` as SVG has it. */
  word(text: string, x: number, y: number, anchor: "start" | "middle" | "end", colour: string, size: number): void {
    this.parts.push(`<text x="${n(x)}" y="${n(y)}" text-anchor="${anchor}" dominant-baseline="central" font-size="${n(size)}" fill="${escaped(colour)}">${escaped(text)}</text>`);
  }
}
