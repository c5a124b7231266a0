/** The lanes as one picture: as on the screen, with captions, legend and the name of the axis. */
import { axisScale } from "../format/number";
import { sheet } from "../state/sheet";
import { view } from "../state/view";
import { ink, plotFont } from "./ink";
import { shownStyles } from "./line-shape";

/** Room for the title and the legend, and for the name of the axis, CSS pixels. */
const HEAD = 46;
const FOOT = 26;

/** A PNG of all lanes; `null` if there is nothing to draw. */
export function picture(): Promise<Blob | null> {
  const lanes = [...document.querySelectorAll<HTMLElement>(".axis .lane")];
  const drawn = lanes.map((lane) => ({
    canvas: lane.querySelector("canvas"),
    caption: lane.querySelector("figcaption")?.textContent ?? "",
  }));
  const ratio = devicePixelRatio;
  const width = Math.max(0, ...drawn.map(({ canvas }) => canvas?.width ?? 0));
  const height = drawn.reduce((sum, { canvas }) => sum + (canvas?.height ?? 0), (HEAD + FOOT) * ratio);
  const paper = document.createElement("canvas");
  paper.width = width;
  paper.height = height;
  const ctx = paper.getContext("2d");
  if (width === 0 || ctx === null) return Promise.resolve(null);
  ctx.fillStyle = ink("--paper");
  ctx.fillRect(0, 0, width, height);
  ctx.font = plotFont().replace("12px", `${12 * ratio}px`);
  ctx.textBaseline = "middle";
  ctx.fillStyle = ink("--ink");
  const { title, invented } = sheet.peek();
  ctx.fillText(invented ? `${title} (invented)` : title, 62 * ratio, 12 * ratio);
  drawLegend(ctx, 62 * ratio, 32 * ratio, ratio);
  let y = HEAD * ratio;
  for (const { canvas, caption } of drawn) {
    if (canvas === null) continue;
    ctx.drawImage(canvas, 0, y);
    ctx.fillStyle = ink("--ink-2");
    ctx.fillText(caption, 62 * ratio, y + 10 * ratio);
    y += canvas.height;
  }
  const { from, to } = view.peek();
  ctx.textAlign = "center";
  ctx.fillText(`W (${axisScale(from, to).unit})`, width / 2, y + (FOOT / 2) * ratio);
  return new Promise((resolve) => paper.toBlob(resolve, "image/png"));
}

function drawLegend(ctx: CanvasRenderingContext2D, left: number, y: number, ratio: number): void {
  let x = left;
  for (const style of shownStyles()) {
    ctx.strokeStyle = ink(style.colour);
    ctx.lineWidth = style.width * ratio;
    ctx.setLineDash(style.dash.map((length) => length * ratio));
    ctx.beginPath();
    ctx.moveTo(x, y);
    ctx.lineTo(x + 28 * ratio, y);
    ctx.stroke();
    ctx.setLineDash([]);
    x += 34 * ratio;
    ctx.fillStyle = ink("--ink-2");
    ctx.fillText(style.label, x, y);
    x += ctx.measureText(style.label).width + 18 * ratio;
  }
}
