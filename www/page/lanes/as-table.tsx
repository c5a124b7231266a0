/** The lanes in words and as tables, for whoever does not see them; each table as CSV. */
import type { JSX } from "preact";
import { useSignal } from "@preact/signals";
import { Numbers } from "../fit/plot";
import { axisScale, digits, fixed } from "../format/number";
import { TakePlot } from "../parts/take-plot";
import { column, curve, points } from "../state/answers";
import { view } from "../state/view";
import type { Lane } from "./lane";
import { lanesAsSvg } from "./svg";

/** One sentence on what the plot shows. */
export function inWords(): string {
  const shape = curve.value;
  const observed = column("observed");
  if (shape === null || observed === null) return "No curve: the sheet cannot be computed as it stands.";
  let top = 0;
  for (let i = 1; i < observed.length; i += 1) if ((observed[i] ?? 0) > (observed[top] ?? 0)) top = i;
  const { from, to } = view.value;
  const { unit, per } = axisScale(from, to);
  const used = points.value.filter((point) => point.used).length;
  return (
    `Observed cross section between ${fixed(from / per, 2)} and ${fixed(to / per, 2)} ${unit}: at most ` +
    `${digits(observed[top] ?? Number.NaN, 3)} nb at ${fixed((shape.w[top] ?? 0) / per, 2)} ${unit}. ` +
    `${points.value.length} points, ${used} in use.`
  );
}

/** The sentence, and behind it the numbers of every lane on the screen. */
export function AsTable({ shown }: { shown: readonly Lane[] }): JSX.Element {
  const open = useSignal(false);
  return (
    <details open={open.value} onToggle={(event) => (open.value = event.currentTarget.open)}>
      <summary>
        Lanes as tables<span class="unseen">. {inWords()}</span>
      </summary>
      {open.value && shown.map((lane) => <LaneTable key={lane.id} lane={lane} />)}
    </details>
  );
}

function LaneTable({ lane }: { lane: Lane }): JSX.Element {
  const columns = lane.numbers();
  return (
    <div class="lane-table">
      <Numbers name={lane.title} columns={columns} significant={4} />
      <span class="actions">
        <TakePlot name={lane.id} what={lane.title} text={() => lanesAsSvg([lane])} />
      </span>
    </div>
  );
}
