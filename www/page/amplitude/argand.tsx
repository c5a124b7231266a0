/** The Argand path: amplitude in the complex plane with energies on it and the unitarity circle. */
import type { JSX } from "preact";
import { axisScale, fixed } from "../format/number";
import { ink } from "../lanes/ink";
import { cursor, view } from "../state/view";
import { frame, path, type Box } from "./frame";
import { Picture, type Paper } from "./picture";
import { column, here, line } from "./state";

/** Energies written on the path. */
const MARKS = 7;

function draw(paper: Paper): void {
  const answer = line.value;
  const w = column(answer, "W");
  const [a, b] = [column(answer, "Re a"), column(answer, "Im a")];
  const [re, im] = [column(answer, "Re T"), column(answer, "Im T")];
  // The circle of unitarity and every path have to be in it.
  let [left, right, low, high] = [-0.62, 0.62, -0.08, 1.08];
  for (const [x, y] of [[a, b], [re, im]] as const) {
    for (let i = 0; i < (x?.length ?? 0); i += 1) {
      left = Math.min(left, (x?.[i] ?? 0) * 1.06);
      right = Math.max(right, (x?.[i] ?? 0) * 1.06);
      low = Math.min(low, (y?.[i] ?? 0) * 1.06);
      high = Math.max(high, (y?.[i] ?? 0) * 1.06);
    }
  }
  // One scale on both axes: a circle stays a circle.
  const [wide, tall] = [paper.width - 76, paper.height - 52];
  const per = Math.max((right - left) / wide, (high - low) / tall);
  const [cx, cy] = [(left + right) / 2, (low + high) / 2];
  const box = frame(
    paper,
    { from: cx - (per * wide) / 2, to: cx + (per * wide) / 2, name: "real part" },
    { from: cy - (per * tall) / 2, to: cy + (per * tall) / 2, name: "imaginary part" },
  );
  const { ctx, root } = paper;
  ctx.save();
  ctx.strokeStyle = ink("--edge", root);
  ctx.setLineDash([4, 4]);
  ctx.beginPath();
  ctx.arc(box.x(0), box.y(0.5), 0.5 / per, 0, 2 * Math.PI);
  ctx.stroke();
  ctx.restore();
  if (w === null) return;
  if (a !== null && b !== null) path(paper, box, a, b, { colour: "--c-observed", width: 2 });
  if (re !== null && im !== null) path(paper, box, re, im, { colour: "--c-part-2", width: 1.75, dash: a === null ? [] : [7, 4] });
  const [x, y] = a !== null && b !== null ? [a, b] : [re, im];
  if (x === null || y === null) return;
  energies(paper, box, w, x, y);
  dot(paper, box, w, x, y, here.value, 5);
  if (a !== null && re !== null && im !== null) dot(paper, box, w, re, im, here.value, 4);
}

/** Place of the energy next to `at`. */
export function nearestIndex(w: Float64Array, at: number): number {
  let best = 0;
  for (let i = 1; i < w.length; i += 1) if (Math.abs((w[i] ?? 0) - at) < Math.abs((w[best] ?? 0) - at)) best = i;
  return best;
}

/** Energies along the path, evenly by length, each beside its tick. */
function energies(paper: Paper, box: Box, w: Float64Array, x: Float64Array, y: Float64Array): void {
  const { ctx, root } = paper;
  const length: number[] = [0];
  for (let i = 1; i < w.length; i += 1) length.push((length[i - 1] ?? 0) + Math.hypot((x[i] ?? 0) - (x[i - 1] ?? 0), (y[i] ?? 0) - (y[i - 1] ?? 0)));
  const all = length.at(-1) ?? 0;
  if (!(all > 0)) return;
  const { unit, per } = axisScale(view.value.from, view.value.to);
  const decimals = Math.max(0, Math.min(6, Math.ceil(-Math.log10((view.value.to - view.value.from) / per / 300))));
  const written: [number, number][] = [];
  ctx.save();
  ctx.fillStyle = ink("--ink-2", root);
  for (let k = 1; k < MARKS; k += 1) {
    const i = length.findIndex((here) => here >= (all * k) / MARKS);
    const [px, py] = [box.x(x[i] ?? 0), box.y(y[i] ?? 0)];
    const out = Math.atan2(py - box.y(0.5), px - box.x(0));
    ctx.beginPath();
    ctx.arc(px, py, 2.5, 0, 2 * Math.PI);
    ctx.fill();
    // Towards the middle of the circle, where there is room on every screen.
    ctx.textAlign = Math.cos(out) > 0.3 ? "right" : Math.cos(out) < -0.3 ? "left" : "center";
    const place: [number, number] = [px - 9 * Math.cos(out), py - 12 * Math.sin(out)];
    if (written.some(([x, y]) => Math.abs(x - place[0]) < 62 && Math.abs(y - place[1]) < 14)) continue;
    written.push(place);
    ctx.fillText(`${fixed((w[i] ?? 0) / per, decimals)} ${k === 1 ? unit : ""}`.trim(), ...place);
  }
  ctx.restore();
}

function dot(paper: Paper, box: Box, w: Float64Array, x: Float64Array, y: Float64Array, at: number, size: number): void {
  const i = nearestIndex(w, at);
  paper.ctx.fillStyle = ink("--accent", paper.root);
  paper.ctx.beginPath();
  paper.ctx.arc(box.x(x[i] ?? 0), box.y(y[i] ?? 0), size, 0, 2 * Math.PI);
  paper.ctx.fill();
}

const height = (width: number): number => Math.min(420, width * 0.86);

/** The picture. */
export function Argand(): JSX.Element {
  const both = column(line.value, "Re a") !== null && column(line.value, "Re T") !== null;
  return (
    <figure class="pane">
      <figcaption>
        Argand path{both && <span class="quiet"> · solid: this state alone, dashed: the whole sum</span>}
      </figcaption>
      <Picture height={height} draw={draw} label={`Argand path with the unitarity circle; the marker is at ${fixed(cursor.value ?? here.value, 6)} GeV`} />
    </figure>
  );
}
