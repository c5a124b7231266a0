/** Whether the running point is healthy: seen, expected so far, p-value; each with what is behind it. */
import type { JSX } from "preact";
import { count, digits, hours, pValue, signed } from "../format/number";
import { Explained, type Input } from "../parts/why-list";
import type { PointView } from "../state/answers";
import { sheet } from "../state/sheet";

/** The three numbers. */
export function Health({ point }: { point: PointView }): JSX.Element {
  return (
    <dl class="trio">
      <div>
        <dt>Seen</dt>
        <dd>{point.seen === null ? "–" : count(point.seen)}</dd>
      </div>
      <div>
        <dt>Expected so far</dt>
        <dd>
          <Expected point={point} />
        </dd>
      </div>
      <div>
        <dt>
          <span class="sym">p</span>-value
        </dt>
        <dd>
          <PValue point={point} />
        </dd>
      </div>
    </dl>
  );
}

/** Counts expected by now, and why. */
export function Expected({ point }: { point: PointView }): JSX.Element {
  if (point.expected === null) return <>–</>;
  return <Explained of="expected" title={`Expected so far, ${point.id}`} value={count(point.expected)} inputs={() => inputsOf(point)} />;
}

/** How likely a count this far off is, and why. */
export function PValue({ point }: { point: PointView }): JSX.Element {
  if (point.p === null) return <>–</>;
  return <Explained of="p-value" title={`p-value, ${point.id}`} value={pValue(point.p)} inputs={() => [...seenAgainst(point), ...inputsOf(point)]} />;
}

/** Distance from the expected count, and why. */
export function Pull({ point }: { point: PointView }): JSX.Element | null {
  if (point.pull === null) return null;
  return <Explained of="pull" title={`Pull, ${point.id}`} value={signed(point.pull, 2)} inputs={() => [...seenAgainst(point), ...inputsOf(point)]} />;
}

function seenAgainst(point: PointView): Input[] {
  return [
    ["Seen n", point.seen === null ? "nothing yet" : count(point.seen)],
    ["Expected μ", point.expected === null ? "unknown" : count(point.expected)],
    ["Pull", point.pull === null ? "none" : signed(point.pull, 2)],
  ];
}

function inputsOf(point: PointView): Input[] {
  const { detection, data } = sheet.value;
  const row = data.rows.find((other) => other.id === point.id);
  return [
    ["W", `${(point.w * 1e3).toFixed(3)} MeV`],
    ["Luminosity L, dead time taken off", point.luminosity > 0 ? `${digits(point.luminosity, 5)} nb^-1` : "none yet"],
    ["Live time t", point.time > 0 ? hours(point.time) : "not known"],
    ["Efficiency ε", row?.efficiency || detection.efficiency || "1"],
    ["Background", [detection.background_cross_section, detection.background_rate].filter(Boolean).join(", ") || "none"],
  ];
}
