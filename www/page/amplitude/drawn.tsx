/** The diagrams as they are drawn, each with what it contributes at the cursor. */
import type { JSX } from "preact";
import { digits, fixed } from "../format/number";
import { scalarOutside } from "../model/diagrams";
import { sheet } from "../state/sheet";
import type { DiagramReading, Reaction } from "../state/types";
import { partsOf } from "./angles";
import { alongCos, asCrossSection, cos } from "./state";

/** Names of the four legs: in above, in below, out above, out below. */
const LEGS: Record<Reaction, readonly [string, string, string, string]> = {
  pair_to_other_pair: ["f", "f̄", "F", "F̄"],
  other_elastic: ["f", "F", "f", "F"],
  pair_elastic: ["f", "f̄", "f", "f̄"],
  same_elastic: ["f", "f", "f", "f"],
  compton: ["f", "φ", "f", "φ"],
  pair_to_scalars: ["f", "f̄", "φ", "φ"],
};

type Point = readonly [number, number];

/** Places of both vertices by channel: side by side, or one above the other. */
const VERTICES: Record<string, readonly [Point, Point]> = {
  s: [[62, 48], [118, 48]],
  t: [[90, 26], [90, 70]],
  u: [[90, 26], [90, 70]],
};
const CORNERS: readonly Point[] = [[22, 14], [22, 82], [158, 14], [158, 82]];

/** Which vertex each leg ends in: s joins the incoming pair, t keeps above above, u crosses the outgoing. */
const ENDS: Record<string, readonly [number, number, number, number]> = { s: [0, 0, 1, 1], t: [0, 1, 0, 1], u: [0, 1, 1, 0] };

function Drawn({ of, reaction, share }: { of: DiagramReading; reaction: Reaction; share: number }): JSX.Element {
  const ends = ENDS[of.channel] ?? ENDS["s"] ?? [0, 0, 1, 1];
  const vertices = VERTICES[of.channel] ?? [[62, 48], [118, 48]];
  const legs = LEGS[reaction];
  const outside = scalarOutside(reaction);
  const [a, b] = vertices;
  const waved = !of.fermion_exchanged;
  return (
    <svg class="diagram" viewBox="0 0 180 96" role="img" aria-label={`${of.channel} channel, ${of.mediator}`}>
      {CORNERS.map(([x, y], i) => {
        const [vx, vy] = vertices[ends[i] ?? 0] ?? a;
        const scalar = outside && legs[i] === "φ";
        return (
          <g key={i}>
            <line x1={x} y1={y} x2={vx} y2={vy} class={scalar ? "leg leg-scalar" : "leg"} />
            <text x={x + (i < 2 ? -8 : 8)} y={y + 4} text-anchor={i < 2 ? "end" : "start"}>
              {legs[i]}
            </text>
          </g>
        );
      })}
      <line x1={a[0]} y1={a[1]} x2={b[0]} y2={b[1]} class={waved ? "inner leg-scalar" : "inner"} style={{ strokeWidth: `${1.5 + 4 * Math.sqrt(Math.min(1, share))}` }} />
      <text x={of.channel === "s" ? 90 : 98} y={of.channel === "s" ? 40 : 52} text-anchor={of.channel === "s" ? "middle" : "start"}>
        {of.fermion_exchanged ? "f" : of.mediator}
      </text>
      <circle cx={a[0]} cy={a[1]} r="3" />
      <circle cx={b[0]} cy={b[1]} r="3" />
    </svg>
  );
}

/** All diagrams of the reaction and their interferences at the cursor. */
export function Diagrams(): JSX.Element | null {
  const answer = alongCos.value;
  const reaction = sheet.value.model.diagrams?.reaction;
  if (answer === null || answer.diagrams.length === 0 || reaction === undefined) return null;
  const x = answer.columns_[0]?.values ?? new Float64Array(0);
  let at = 0;
  for (let i = 1; i < x.length; i += 1) if (Math.abs((x[i] ?? 0) - cos.value) < Math.abs((x[at] ?? 0) - cos.value)) at = i;
  const [sum, ...parts] = partsOf(answer);
  const total = sum?.values[at] ?? 0;
  const unit = asCrossSection.value ? " nb" : "";
  const told = (value: number): string => `${digits(value, 4)}${unit}${total > 0 ? `, ${fixed((value / total) * 100, 1)} %` : ""}`;
  const n = answer.diagrams.length;
  return (
    <section aria-label="Diagrams">
      <h3>
        Diagrams at the cursor <span class="quiet">· {asCrossSection.value ? "dσ/dcos θ" : "|M|²"} = {digits(total, 5)}{unit}</span>
      </h3>
      <ul class="diagrams">
        {answer.diagrams.map((of, i) => {
          const value = parts[i]?.values[at] ?? 0;
          return (
            <li key={i}>
              <Drawn of={of} reaction={reaction} share={total > 0 ? value / total : 0} />
              <p>
                {of.channel} channel{of.fermion_exchanged ? "" : `, ${of.mediator}`}
                <br />
                <span class="amount">{told(value)}</span>
              </p>
            </li>
          );
        })}
        {parts.slice(n).map((part) => (
          <li key={part.name} class="diagram-words">
            <p>
              {part.name}
              <br />
              <span class="amount">{told(part.values[at] ?? 0)}</span>
            </p>
          </li>
        ))}
      </ul>
    </section>
  );
}
