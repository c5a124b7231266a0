/** The lanes on the screen as one SVG: for a paper, a slide, a log book. */
import { ticks } from "../fit/plot";
import { axisScale } from "../format/number";
import { sheet } from "../state/sheet";
import { view } from "../state/view";
import { GUTTER, MARGIN, shareOf, tickTexts } from "./axis";
import type { Drawing } from "./chart";
import { heightOf, LABELS } from "./heights";
import { ink, plotFont } from "./ink";
import type { Lane } from "./lane";
import { shownStyles } from "./line-shape";
import { shown } from "./list";
import { escaped, SvgPen } from "./svg-pen";

const WIDTH = 900;
const HEAD = 46;
/** Room above a lane's box for its caption. */
const CAPTION = 22;
const FOOT = 26;

/** The picture's text. */
export function lanesAsSvg(lanes: readonly Lane[] = shown.peek()): string {
  // Marks are sized for the screen's own pixels; the picture is in CSS pixels.
  const ratio = devicePixelRatio;
  const heights = lanes.map((lane) => heightOf(lane));
  const height = HEAD + heights.reduce((sum, one) => sum + one, 0) + LABELS + FOOT;
  const pen = new SvgPen("lane");
  const { title, invented } = sheet.peek();
  pen.word(invented ? `${title} (invented)` : title, GUTTER * ratio, 12 * ratio, "start", ink("--ink"), 12 * ratio);
  legend(pen, 32 * ratio, ratio);
  let top = HEAD;
  lanes.forEach((lane, i) => {
    one(pen, lane, top, heights[i] ?? 100, ratio);
    top += heights[i] ?? 100;
  });
  const { from, to } = view.peek();
  const size = 12 * ratio;
  const splits = ticks(from, to, 8);
  tickTexts(splits, view.peek()).forEach((text, i) => {
    const x = (GUTTER + shareOf(splits[i] ?? 0, view.peek()) * (WIDTH - GUTTER - MARGIN)) * ratio;
    pen.word(text, x, (top + 13) * ratio, "middle", ink("--ink-2"), size);
  });
  pen.word(`W (${axisScale(from, to).unit})`, (WIDTH / 2) * ratio, (top + LABELS + FOOT / 2) * ratio, "middle", ink("--ink-2"), size);
  const font = plotFont().replace(/^\S+ /, "");
  return (
    `<svg xmlns="http://www.w3.org/2000/svg" width="${WIDTH}" height="${height}" viewBox="0 0 ${WIDTH * ratio} ${height * ratio}" font-family="${escaped(font)}">\n` +
    `<title>${escaped(title)}</title>\n<rect width="100%" height="100%" fill="${ink("--paper")}"/>\n${pen.text()}\n</svg>\n`
  );
}

function legend(pen: SvgPen, y: number, ratio: number): void {
  let x = GUTTER * ratio;
  for (const style of shownStyles()) {
    pen.strokeStyle = ink(style.colour);
    pen.lineWidth = style.width * ratio;
    pen.setLineDash(style.dash.map((length) => length * ratio));
    pen.beginPath();
    pen.moveTo(x, y);
    pen.lineTo(x + 28 * ratio, y);
    pen.stroke();
    pen.word(style.label, x + 34 * ratio, y, "start", ink("--ink-2"), 12 * ratio);
    x += (34 + 7 * style.label.length + 18) * ratio;
  }
  pen.setLineDash([]);
}

function one(pen: SvgPen, lane: Lane, top: number, height: number, ratio: number): void {
  const drawing: Drawing = lane.draw();
  const bbox = { left: GUTTER * ratio, top: (top + CAPTION) * ratio, width: (WIDTH - GUTTER - MARGIN) * ratio, height: (height - CAPTION - 6) * ratio };
  const place = (value: number, scale: string): number =>
    scale === "x"
      ? bbox.left + shareOf(value, view.peek()) * bbox.width
      : bbox.top + bbox.height - ((value - drawing.low) / (drawing.high - drawing.low)) * bbox.height;
  const surface = { ctx: pen, bbox, root: document.documentElement, valToPos: place };
  pen.word(`${lane.title} (${lane.unit})`, bbox.left, (top + 10) * ratio, "start", ink("--ink-2"), 12 * ratio);
  drawing.under?.(surface);
  pen.lineWidth = ratio;
  pen.strokeStyle = ink("--c-grid");
  const { from, to } = view.peek();
  const lines = ticks(drawing.low, drawing.high, Math.max(2, height / 48));
  for (const value of lines) {
    pen.beginPath();
    pen.moveTo(bbox.left, place(value, "y"));
    pen.lineTo(bbox.left + bbox.width, place(value, "y"));
    pen.stroke();
    pen.word(String(Number(value.toPrecision(6))).replace("-", "−"), bbox.left - 8 * ratio, place(value, "y"), "end", ink("--ink-2"), 12 * ratio);
  }
  for (const w of ticks(from, to, 8)) {
    pen.beginPath();
    pen.moveTo(place(w, "x"), bbox.top);
    pen.lineTo(place(w, "x"), bbox.top + bbox.height);
    pen.stroke();
  }
  pen.strokeStyle = ink("--edge");
  pen.beginPath();
  pen.moveTo(bbox.left, bbox.top);
  pen.lineTo(bbox.left, bbox.top + bbox.height);
  pen.lineTo(bbox.left + bbox.width, bbox.top + bbox.height);
  pen.stroke();
  pen.save();
  pen.beginPath();
  pen.rect(bbox.left, bbox.top, bbox.width, bbox.height);
  pen.clip();
  for (const trace of drawing.traces) {
    pen.strokeStyle = ink(trace.colour);
    pen.lineWidth = trace.width * ratio;
    pen.setLineDash(trace.dash.map((length) => length * ratio));
    pen.beginPath();
    let down = false;
    for (let i = 0; i < drawing.w.length; i += 1) {
      const value = trace.values[i];
      const w = drawing.w[i];
      if (value === null || value === undefined || w === undefined) {
        down = false;
        continue;
      }
      if (down) pen.lineTo(place(w, "x"), place(value, "y"));
      else pen.moveTo(place(w, "x"), place(value, "y"));
      down = true;
    }
    pen.stroke();
  }
  pen.restore();
  pen.setLineDash([]);
  drawing.over?.(surface);
}
