/** Box, ticks and names of axes of a picture. */
import { tickTexts } from "../lanes/axis";
import { ink } from "../lanes/ink";
import type { Paper } from "./picture";

/** The inner box and how values become places in it. */
export interface Box {
  left: number;
  top: number;
  width: number;
  height: number;
  x: (value: number) => number;
  y: (value: number) => number;
}

export interface Span {
  from: number;
  to: number;
}

/** Round places within a span, about `count` of them. */
export function ticks({ from, to }: Span, count: number): number[] {
  const raw = (to - from) / count;
  if (!(raw > 0)) return [];
  const power = 10 ** Math.floor(Math.log10(raw));
  const step = ([1, 2, 5, 10].find((n) => n * power >= raw) ?? 10) * power;
  const found: number[] = [];
  for (let i = Math.ceil(from / step); i * step <= to + 1e-9 * step; i += 1) found.push(i * step);
  return found;
}

function plain(value: number): string {
  return String(Number(value.toPrecision(6))).replace("-", "−");
}

/** Draws axes; `energy`: the axis x is W in GeV. */
export function frame(paper: Paper, x: Span & { name: string; energy?: boolean }, y: Span & { name: string; energy?: boolean }): Box {
  const { ctx, root } = paper;
  const box: Box = {
    left: 62,
    top: 12,
    width: paper.width - 62 - 14,
    height: paper.height - 12 - 40,
    x: (value) => 62 + ((value - x.from) / (x.to - x.from)) * (paper.width - 76),
    y: (value) => 12 + (1 - (value - y.from) / (y.to - y.from)) * (paper.height - 52),
  };
  ctx.save();
  ctx.strokeStyle = ink("--edge", root);
  ctx.lineWidth = 1;
  ctx.strokeRect(box.left + 0.5, box.top + 0.5, box.width - 1, box.height - 1);
  ctx.fillStyle = ink("--ink-2", root);
  const across = ticks(x, Math.max(2, Math.floor(box.width / 90)));
  const acrossTexts = x.energy ? tickTexts(across, x) : across.map(plain);
  ctx.textAlign = "center";
  across.forEach((value, i) => {
    const at = box.x(value);
    ctx.fillRect(Math.round(at), box.top + box.height, 1, 4);
    ctx.fillText(acrossTexts[i] ?? "", Math.min(at, paper.width - 24), box.top + box.height + 13);
  });
  ctx.fillText(x.name, box.left + box.width / 2, paper.height - 9);
  const up = ticks(y, Math.max(2, Math.floor(box.height / 42)));
  const upTexts = y.energy ? up.map((value) => plain(value * 1e3)) : up.map(plain);
  ctx.textAlign = "right";
  up.forEach((value, i) => {
    const at = box.y(value);
    ctx.fillRect(box.left - 4, Math.round(at), 4, 1);
    ctx.fillText(upTexts[i] ?? "", box.left - 7, at);
  });
  ctx.textAlign = "center";
  ctx.translate(10, box.top + box.height / 2);
  ctx.rotate(-Math.PI / 2);
  ctx.fillText(y.name, 0, 0);
  ctx.restore();
  return box;
}

/** A polyline through places; NaN breaks it. */
export function path(paper: Paper, box: Box, x: ArrayLike<number>, y: ArrayLike<number>, style: { colour: string; width: number; dash?: number[] }): void {
  const { ctx, root } = paper;
  ctx.save();
  ctx.beginPath();
  ctx.rect(box.left, box.top, box.width, box.height);
  ctx.clip();
  ctx.strokeStyle = ink(style.colour, root);
  ctx.lineWidth = style.width;
  ctx.lineJoin = "round";
  ctx.setLineDash(style.dash ?? []);
  ctx.beginPath();
  let down = false;
  for (let i = 0; i < x.length; i += 1) {
    const [a, b] = [x[i] ?? NaN, y[i] ?? NaN];
    if (!Number.isFinite(a) || !Number.isFinite(b)) {
      down = false;
      continue;
    }
    if (down) ctx.lineTo(box.x(a), box.y(b));
    else ctx.moveTo(box.x(a), box.y(b));
    down = true;
  }
  ctx.stroke();
  ctx.restore();
}
