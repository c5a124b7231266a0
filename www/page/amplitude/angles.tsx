/** Energy and angle: the (W, cos θ) plane with lines of equal value, and cuts through it by diagram and interference. */
import type { JSX } from "preact";
import { axisScale, digits, fixed } from "../format/number";
import { ink } from "../lanes/ink";
import { Switch } from "../parts/field";
import { look } from "../state/prefs";
import { cursor } from "../state/view";
import { contours, levels } from "./contours";
import { frame, path } from "./frame";
import { kept, Picture, ramp, raster, type Paper } from "./picture";
import { alongCos, alongW, asCrossSection, column, cos, here, image, type Answer } from "./state";

/** Decades of an image that are told apart. */
const DECADES = 4;

function drawImage(paper: Paper): void {
  const answer = image.value;
  if (answer === null) return;
  const { columns: nc, rows: nw, least, most } = answer;
  const values = answer.columns_[0]?.values;
  const w = column(answer, "W");
  if (values === undefined || w === null || nw < 2) return;
  const [from, to] = [w[0] ?? 0, w[nw - 1] ?? 1];
  const { unit } = axisScale(from, to);
  const box = frame(paper, { from, to, name: `W (${unit})`, energy: true }, { from: -1, to: 1, name: "cos θ" });
  void look.value;
  const { root, ctx } = paper;
  const table = ramp([ink("--well", root), ink("--c-observed", root), ink("--ink", root)]);
  const at = (x: number, y: number): number => values[x * nc + y] ?? 0;
  const share = (value: number): number => (value > 0 && most > 0 ? Math.max(0, 1 + Math.log10(value / most) / DECADES) : -1);
  const bitmap = kept(answer, look.value, () => raster(nw, nc, (x, y) => share(at(x, y)), table));
  if (bitmap !== null) ctx.drawImage(bitmap, box.left, box.top, box.width, box.height);
  ctx.save();
  ctx.beginPath();
  ctx.rect(box.left, box.top, box.width, box.height);
  ctx.clip();
  // A line needs no more places than the eye has between two ticks.
  const [sx, sy] = [Math.max(1, Math.floor(nw / 100)), Math.max(1, Math.floor(nc / 75))];
  const [mx, my] = [Math.floor((nw - 1) / sx) + 1, Math.floor((nc - 1) / sy) + 1];
  const written: [number, number][] = [];
  const heights = levels(least, most);
  const lines = kept(answer, "lines", () => contours(mx, my, (x, y) => at(x * sx, y * sy), heights));
  heights.forEach((level, nth) => {
    // Labels of neighbours stand at different heights, so that they do not run into each other.
    const height = box.top + box.height * (0.12 + 0.76 * ((nth * 0.38) % 1));
    ctx.strokeStyle = share(level) > 0.55 ? ink("--paper", root) : ink("--ink-2", root);
    ctx.lineWidth = 1;
    ctx.beginPath();
    let label: [number, number] | null = null;
    for (const [x1 = 0, y1 = 0, x2 = 0, y2 = 0] of lines[nth] ?? []) {
      const place = (x: number, y: number): [number, number] => [box.left + ((x * sx) / (nw - 1)) * box.width, box.top + (1 - (y * sy) / (nc - 1)) * box.height];
      const [a, b] = [place(x1, y1), place(x2, y2)];
      ctx.moveTo(...a);
      ctx.lineTo(...b);
      if (label === null || Math.abs(a[1] - height) < Math.abs(label[1] - height)) label = a;
    }
    ctx.stroke();
    const crowded = (place: [number, number]): boolean => written.some(([x, y]) => Math.abs(x - place[0]) < 44 && Math.abs(y - place[1]) < 15);
    if (label !== null && !crowded(label)) {
      written.push(label);
      ctx.lineWidth = 3;
      ctx.strokeStyle = ink("--paper", root);
      ctx.fillStyle = ink("--ink", root);
      ctx.textAlign = "center";
      ctx.strokeText(digits(level, 2), ...label);
      ctx.fillText(digits(level, 2), ...label);
    }
  });
  // Where the cuts are taken.
  ctx.strokeStyle = ink("--accent", root);
  ctx.lineWidth = 1;
  ctx.beginPath();
  ctx.moveTo(box.x(here.value), box.top);
  ctx.lineTo(box.x(here.value), box.top + box.height);
  ctx.moveTo(box.left, box.y(cos.value));
  ctx.lineTo(box.left + box.width, box.y(cos.value));
  ctx.stroke();
  ctx.restore();
}

const COLOURS = ["--c-part-1", "--c-part-2", "--c-part-3", "--c-part-4"];

/** Parts of a cut as drawn: total, each diagram, each interference. */
export function partsOf(answer: Answer<"slice">): { name: string; values: Float64Array; colour: string; dash: number[] }[] {
  const [, prefactor, total, ...rest] = answer.columns_;
  if (prefactor === undefined) return [];
  if (total === undefined) return [{ name: "dσ/dcos", values: prefactor.values, colour: "--c-observed", dash: [] }];
  const scaled = (values: Float64Array): Float64Array => (asCrossSection.value ? values.map((value, i) => value * (prefactor.values[i] ?? 0)) : values);
  const n = answer.diagrams.length;
  return [
    { name: "sum", values: scaled(total.values), colour: "--c-observed", dash: [] },
    ...rest.map((part, i) => ({ name: part.name, values: scaled(part.values), colour: COLOURS[i % 4] ?? "--ink", dash: i < n ? [7, 4] : [2, 4] })),
  ];
}

function drawCut(which: typeof alongCos, energy: boolean): (paper: Paper) => void {
  return (paper) => {
    const answer = which.value;
    const x = answer?.columns_[0]?.values;
    if (answer === null || x === undefined || x.length < 2) return;
    const parts = partsOf(answer);
    let [low, high] = [0, 0];
    for (const part of parts) {
      for (const value of part.values) {
        if (value < low) low = value;
        if (value > high) high = value;
      }
    }
    if (!(high > low)) high = low + 1;
    const [from, to] = [x[0] ?? 0, x[x.length - 1] ?? 1];
    const room = (high - low) * 0.05;
    const box = frame(
      paper,
      energy ? { from, to, name: `W (${axisScale(from, to).unit})`, energy: true } : { from: -1, to: 1, name: "cos θ" },
      { from: low < 0 ? low - room : 0, to: high + room, name: unitOf(answer) },
    );
    for (const part of [...parts].reverse()) path(paper, box, x, part.values, { colour: part.colour, width: part.name === "sum" ? 2.25 : 1.5, dash: part.dash });
    const at = box.x(energy ? here.value : cos.value);
    path(paper, { ...box, x: (value) => value, y: (value) => value }, [at, at], [box.top, box.top + box.height], { colour: "--accent", width: 1 });
  };
}

function unitOf(answer: Answer<"slice">): string {
  return answer.diagrams.length === 0 || asCrossSection.value ? "dσ/dcos θ (nb)" : "|M|²";
}

const drawAlongCos = drawCut(alongCos, false);
const drawAlongW = drawCut(alongW, true);

function drawPrefactor(paper: Paper): void {
  const answer = alongW.value;
  const [x, y] = [answer?.columns_[0]?.values, column(answer, "pre-factor")];
  if (x === undefined || y === null || x.length < 2) return;
  const [from, to] = [x[0] ?? 0, x[x.length - 1] ?? 1];
  const high = y.reduce((a, b) => Math.max(a, b), 0) || 1;
  const box = frame(paper, { from, to, name: `W (${axisScale(from, to).unit})`, energy: true }, { from: 0, to: high * 1.05, name: "nb" });
  path(paper, box, x, y, { colour: "--c-radiated", width: 1.75 });
}

function point(x: number, y: number): void {
  const w = column(image.peek(), "W");
  const canvas = document.querySelector<HTMLCanvasElement>("[data-pane=angles] canvas");
  if (w === null || canvas === null) return;
  const share = (x * canvas.clientWidth - 62) / (canvas.clientWidth - 76);
  const up = 1 - (y * canvas.clientHeight - 12) / (canvas.clientHeight - 52);
  if (share < 0 || share > 1 || up < 0 || up > 1) return;
  const [from, to] = [w[0] ?? 0, w[w.length - 1] ?? 1];
  cursor.value = from + share * (to - from);
  cos.value = Math.round((2 * up - 1) * 1000) / 1000;
}

const tall = (width: number): number => Math.min(400, width * 0.72);
const low = (width: number): number => Math.min(280, width * 0.6);

/** The pictures. */
export function Angles(): JSX.Element {
  const answer = alongCos.value;
  const diagrams = (answer?.diagrams.length ?? 0) > 0;
  const { unit, per } = axisScale(here.value, here.value);
  const at = `${fixed(here.value / per, 3)} ${unit}`;
  return (
    <>
      <div class="panes">
        <figure class="pane" data-pane="angles">
          <figcaption>
            {diagrams && !asCrossSection.value ? "|M|²" : "dσ/dcos θ"} over energy and angle <span class="quiet">· {DECADES} decades, lines at round values</span>
          </figcaption>
          <Picture height={tall} draw={drawImage} label="Image over energy and cos theta" onPoint={point} />
          {diagrams && <Switch label="dσ/dcos θ in nb instead of |M|²" on={asCrossSection.value} onChange={(on) => (asCrossSection.value = on)} />}
          <div class="field">
            <label>
              cos θ = {fixed(cos.value, 2)}
              <input class="slider" type="range" min="-1" max="1" step="0.01" value={cos.value} onInput={(event) => (cos.value = Number(event.currentTarget.value))} />
            </label>
          </div>
        </figure>
        <figure class="pane">
          <figcaption>
            Against cos θ at <span class="sym">W</span> = {at}
          </figcaption>
          <Picture height={low} draw={drawAlongCos} label={`Angular distribution at ${at}`} />
          <figcaption>
            Against <span class="sym">W</span> at cos θ = {fixed(cos.value, 2)}
          </figcaption>
          <Picture height={low} draw={drawAlongW} label={`Energy dependence at cos theta ${fixed(cos.value, 2)}`} />
          {answer !== null && diagrams && <Legend answer={answer} />}
        </figure>
      </div>
      {diagrams && (
        <figure class="pane">
          <figcaption>
            Kinematic pre-factor (ħc)² p_f/(32π s p_i) <span class="quiet">· dσ/dcos θ is this times |M|²{answer?.identical_factor === 0.5 && "; totals take ½ for identical particles"}</span>
          </figcaption>
          <Picture height={() => 170} draw={drawPrefactor} label="Kinematic pre-factor against energy" />
        </figure>
      )}
    </>
  );
}

function Legend({ answer }: { answer: Answer<"slice"> }): JSX.Element {
  return (
    <ul class="cut-legend">
      {partsOf(answer).map((part) => (
        <li key={part.name}>
          <svg width="28" height="8" aria-hidden="true">
            <line x1="0" y1="4" x2="28" y2="4" style={{ stroke: `var(${part.colour})` }} stroke-width="2" stroke-dasharray={part.dash.join(" ")} />
          </svg>
          {part.name}
        </li>
      ))}
    </ul>
  );
}
