/** Marks of measured points. Shape tells what colour also tells: full = used, hollow = left out, triangle = running. */
import { ink } from "./ink";
import type { Pen, Surface } from "./surface";

/** One mark in data units. */
export interface Mark {
  x: number;
  y: number;
  low: number;
  high: number;
  kind: "used" | "out" | "running";
  /** Half width of a horizontal error bar, GeV. */
  wide?: number;
}

/** Above so many marks they are drawn small, and as many as can be told apart. */
const MANY = 500;

/** Draws marks with error bars on a plot: one path for all bars of a kind, one for all shapes. */
export function drawMarks(plot: Surface, marks: readonly Mark[]): void {
  const { ctx } = plot;
  const ratio = devicePixelRatio;
  const many = marks.length > MANY;
  const size = (many ? 1.25 : 3.6) * ratio;
  const { left, top, width, height } = plot.bbox;
  ctx.save();
  ctx.beginPath();
  ctx.rect(left - size, top, width + 2 * size, height);
  ctx.clip();
  ctx.lineWidth = (many ? 0.75 : 1.25) * ratio;
  ctx.lineJoin = "round";
  ctx.setLineDash([]);
  for (const kind of ["out", "used", "running"] as const) {
    const shown = placed(plot, marks, kind, many ? 2 * ratio : 0);
    if (shown.length === 0) continue;
    const colour = ink(kind === "out" ? "--c-off" : "--c-data", plot.root);
    ctx.strokeStyle = colour;
    ctx.fillStyle = kind === "out" && !many ? ink("--paper", plot.root) : colour;
    ctx.beginPath();
    for (const { x, y, low, high, from, to } of shown) {
      ctx.moveTo(x, low);
      ctx.lineTo(x, high);
      if (from === to) continue;
      ctx.moveTo(from, y);
      ctx.lineTo(to, y);
    }
    ctx.stroke();
    ctx.beginPath();
    for (const { x, y } of shown) {
      if (many && kind !== "running") ctx.rect(x - size, y - size, 2 * size, 2 * size);
      else shape(ctx, kind, x, y, many ? 3.6 * ratio : size);
    }
    ctx.fill();
    if (!many) ctx.stroke();
  }
  ctx.restore();
}

interface Place {
  x: number;
  y: number;
  low: number;
  high: number;
  from: number;
  to: number;
}

/**
 * Where marks of a kind lie, in pixels. Those closer together than `cell` share one place, whose bar reaches as far as
 * the longest of theirs: nothing that sticks out is lost.
 */
function placed(plot: Surface, marks: readonly Mark[], kind: Mark["kind"], cell: number): Place[] {
  const { left, width } = plot.bbox;
  const places: Place[] = [];
  const cells = new Map<number, Place>();
  for (const mark of marks) {
    if (mark.kind !== kind) continue;
    const x = plot.valToPos(mark.x, "x", true);
    if (!(x > left - 40 && x < left + width + 40)) continue;
    const y = plot.valToPos(mark.y, "y", true);
    const [low, high] = [plot.valToPos(mark.low, "y", true), plot.valToPos(mark.high, "y", true)];
    if (cell > 0) {
      const key = Math.round(x / cell) * 65_536 + Math.round(y / cell);
      const there = cells.get(key);
      if (there !== undefined) {
        there.low = Math.max(there.low, low);
        there.high = Math.min(there.high, high);
        continue;
      }
      const fresh = { x, y, low, high, from: x, to: x };
      cells.set(key, fresh);
      places.push(fresh);
      continue;
    }
    const wide = mark.wide !== undefined && mark.wide > 0;
    const [from, to] = wide ? [plot.valToPos(mark.x - (mark.wide ?? 0), "x", true), plot.valToPos(mark.x + (mark.wide ?? 0), "x", true)] : [x, x];
    places.push({ x, y, low, high, from, to });
  }
  return places;
}

function shape(path: Pen, kind: Mark["kind"], x: number, y: number, size: number): void {
  if (kind === "running") {
    path.moveTo(x, y - size * 1.5);
    path.lineTo(x + size * 1.4, y + size);
    path.lineTo(x - size * 1.4, y + size);
    path.closePath();
  } else {
    path.moveTo(x + size, y);
    path.arc(x, y, size, 0, 2 * Math.PI);
  }
}

/** Draws bars from zero: `solid` for what has been done, hatched outline for what is planned. */
export function drawBars(plot: Surface, bars: readonly { x: number; y: number; solid: boolean; base: number }[]): void {
  const { ctx } = plot;
  const ratio = devicePixelRatio;
  const half = 4 * ratio;
  ctx.save();
  ctx.setLineDash([]);
  ctx.beginPath();
  ctx.rect(plot.bbox.left, plot.bbox.top, plot.bbox.width, plot.bbox.height);
  ctx.clip();
  for (const bar of bars) {
    const x = plot.valToPos(bar.x, "x", true);
    const top = plot.valToPos(bar.base + bar.y, "y", true);
    const bottom = plot.valToPos(bar.base, "y", true);
    if (bar.solid) {
      ctx.fillStyle = ink("--c-observed", plot.root);
      ctx.fillRect(x - half, top, 2 * half, bottom - top);
    } else {
      ctx.strokeStyle = ink("--c-radiated", plot.root);
      ctx.lineWidth = 1.25 * ratio;
      ctx.strokeRect(x - half, top, 2 * half, bottom - top);
      ctx.beginPath();
      for (let y = bottom; y > top; y -= 4 * ratio) {
        ctx.moveTo(x - half, y);
        ctx.lineTo(x + half, Math.max(top, y - 2 * half));
      }
      ctx.stroke();
    }
  }
  ctx.restore();
}

/** Shades a band between two values over the whole width. */
export function drawBand(plot: Surface, low: number, high: number, colour: string): void {
  const top = plot.valToPos(high, "y", true);
  const bottom = plot.valToPos(low, "y", true);
  plot.ctx.save();
  plot.ctx.fillStyle = ink(colour, plot.root);
  plot.ctx.fillRect(plot.bbox.left, top, plot.bbox.width, bottom - top);
  plot.ctx.restore();
}

/** Draws a thin grey line that is not one of the lane's own traces (another sheet's curve). */
export function drawPath(plot: Surface, xs: ArrayLike<number>, ys: ArrayLike<number>): void {
  const { ctx, bbox } = plot;
  ctx.save();
  ctx.setLineDash([]);
  ctx.beginPath();
  ctx.rect(bbox.left, bbox.top, bbox.width, bbox.height);
  ctx.clip();
  ctx.beginPath();
  for (let i = 0; i < xs.length; i += 1) {
    ctx.lineTo(plot.valToPos(xs[i] ?? 0, "x", true), plot.valToPos(ys[i] ?? Number.NaN, "y", true));
  }
  ctx.strokeStyle = ink("--c-off", plot.root);
  ctx.lineWidth = 1.25 * devicePixelRatio;
  ctx.stroke();
  ctx.restore();
}
