/** The propagator against W: |Δ|², real and imaginary part, phase; one axis and cursor with the scan. */
import type { JSX } from "preact";
import { useLayoutEffect, useRef } from "preact/hooks";
import { axisScale } from "../format/number";
import { Chart, type Drawing, type Trace } from "../lanes/chart";
import { ink } from "../lanes/ink";
import { listen } from "../lanes/pointer";
import type { Surface } from "../lanes/surface";
import { view } from "../state/view";
import { column, here, line } from "./state";

interface Curve {
  name: string;
  colour: string;
  dash: number[];
}

interface LaneOf {
  id: string;
  title: string;
  unit: string;
  curves: readonly Curve[];
  /** Fixed range of values. */
  range?: readonly [number, number];
}

const MODULUS: LaneOf = { id: "modulus", title: "|Δ|²", unit: "GeV⁻⁴", curves: [{ name: "|Delta|^2", colour: "--c-observed", dash: [] }] };
const PARTS: LaneOf = {
  id: "parts",
  title: "Re Δ, and Im Δ dashed",
  unit: "GeV⁻²",
  curves: [
    { name: "Re Delta", colour: "--c-radiated", dash: [] },
    { name: "Im Delta", colour: "--c-born", dash: [7, 4] },
  ],
};
const PHASE: LaneOf = { id: "phase", title: "Phase of −Δ", unit: "degrees", curves: [{ name: "phase", colour: "--c-part-1", dash: [] }], range: [-10, 190] };

const T_LANES: readonly LaneOf[] = [
  { id: "modulus", title: "|T|²", unit: "", curves: [{ name: "|T|^2", colour: "--c-observed", dash: [] }] },
  {
    id: "parts",
    title: "Re T, and Im T dashed",
    unit: "",
    curves: [
      { name: "Re T", colour: "--c-radiated", dash: [] },
      { name: "Im T", colour: "--c-born", dash: [7, 4] },
    ],
  },
  { id: "phase", title: "Phase of T", unit: "degrees", curves: [{ name: "phase", colour: "--c-part-1", dash: [] }], range: [-190, 190] },
];

const ELASTIC: LaneOf = {
  id: "elastic",
  title: "Elastic |T|²: sum of resonances, and the K-matrix dashed; 1 is the most",
  unit: "",
  curves: [
    { name: "elastic, sum", colour: "--c-observed", dash: [] },
    { name: "elastic, K-matrix", colour: "--c-part-2", dash: [7, 4] },
  ],
};

/** A lane's curves with the cursor's line over them. */
function draw(of: LaneOf): () => Drawing {
  return () => {
    const answer = line.value;
    const w = column(answer, "W") ?? new Float64Array(0);
    const traces: Trace[] = [];
    let [low, high] = [0, 0];
    for (const curve of of.curves) {
      const values = column(answer, curve.name);
      if (values === null) continue;
      for (const value of values) {
        if (value < low) low = value;
        if (value > high) high = value;
      }
      traces.push({ values, colour: curve.colour, width: 1.75, dash: curve.dash });
    }
    if (of.range !== undefined) [low, high] = of.range;
    if (of.id === "elastic") high = Math.max(high, 1);
    if (!(high > low)) high = low + 1;
    const room = of.range === undefined ? (high - low) * 0.08 : 0;
    const at = here.value;
    return {
      w,
      traces,
      low: low < 0 ? low - room : 0,
      high: high + room,
      over: (plot) => {
        upright(plot, at);
        if (of.id === "elastic") level(plot, 1);
        if (of.range !== undefined) for (const value of [0, 90, 180]) level(plot, value);
        for (const [, threshold] of answer?.thresholds ?? []) dotted(plot, threshold);
      },
    };
  };
}

function upright(plot: Surface, w: number): void {
  stroke(plot, ink("--accent", plot.root), [], w);
}

function dotted(plot: Surface, w: number): void {
  stroke(plot, ink("--ink-3", plot.root), [2, 4], w);
}

function stroke({ ctx, bbox, valToPos }: Surface, colour: string, dash: number[], w: number): void {
  const x = Math.round(valToPos(w, "x", true)) + 0.5;
  if (x < bbox.left || x > bbox.left + bbox.width) return;
  ctx.save();
  ctx.strokeStyle = colour;
  ctx.lineWidth = devicePixelRatio;
  ctx.setLineDash(dash.map((length) => length * devicePixelRatio));
  ctx.beginPath();
  ctx.moveTo(x, bbox.top);
  ctx.lineTo(x, bbox.top + bbox.height);
  ctx.stroke();
  ctx.restore();
}

function level(plot: Surface, value: number): void {
  const { ctx, bbox } = plot;
  const y = Math.round(plot.valToPos(value, "y", true)) + 0.5;
  if (y < bbox.top || y > bbox.top + bbox.height) return;
  ctx.save();
  ctx.strokeStyle = ink("--edge", plot.root);
  ctx.lineWidth = devicePixelRatio;
  ctx.setLineDash([4 * devicePixelRatio, 4 * devicePixelRatio]);
  ctx.beginPath();
  ctx.moveTo(bbox.left, y);
  ctx.lineTo(bbox.left + bbox.width, y);
  ctx.stroke();
  ctx.restore();
}

const DRAWN = new Map<LaneOf, () => Drawing>();
function drawing(of: LaneOf): () => Drawing {
  const known = DRAWN.get(of);
  if (known !== undefined) return known;
  const made = draw(of);
  DRAWN.set(of, made);
  return made;
}

/** The lanes. */
export function AmplitudeLanes(): JSX.Element {
  const box = useRef<HTMLDivElement>(null);
  useLayoutEffect(() => (box.current === null ? undefined : listen(box.current)), []);
  const matrix = column(line.value, "|T|^2") !== null;
  const shown: readonly LaneOf[] = matrix ? T_LANES : [MODULUS, PARTS, PHASE, ...(line.value?.elastic && line.value.names.length > 1 ? [ELASTIC] : [])];
  const { from, to } = view.value;
  return (
    <div>
      <div class="lanes-box" ref={box}>
        {shown.map((of, i) => (
          <figure class="lane" key={of.id} data-lane={`amplitude-${of.id}`}>
            <figcaption>
              {of.title} {of.unit && <span class="quiet">({of.unit})</span>}
            </figcaption>
            <Chart height={130 + (i === shown.length - 1 ? 26 : 0)} labelled={i === shown.length - 1} draw={drawing(of)} />
          </figure>
        ))}
      </div>
      <p class="axis-name" aria-hidden="true">
        <span class="sym">W</span> ({axisScale(from, to).unit}); dotted: thresholds
      </p>
    </div>
  );
}
