/** The curve in words and as a table, for whoever does not see the plot. */
import type { JSX } from "preact";
import { useSignal } from "@preact/signals";
import { axisScale, digits, fixed } from "../format/number";
import { column, curve, points } from "../state/answers";
import { view } from "../state/view";

/** Rows of the table. */
const ROWS = 25;

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

/** The sentence, and behind it the numbers. */
export function AsTable(): JSX.Element {
  const open = useSignal(false);
  const shape = curve.value;
  const { from, to } = view.value;
  const { unit, per } = axisScale(from, to);
  const columns = shape?.columns.slice(0, 6) ?? [];
  const rows = shape === null ? 0 : Math.min(ROWS, shape.w.length);
  return (
    <details open={open.value} onToggle={(event) => (open.value = event.currentTarget.open)}>
      <summary>
        Curve as a table<span class="unseen">. {inWords()}</span>
      </summary>
      {open.value && (
        <div class="table-box table-box-short" tabIndex={0} role="region" aria-label="Curve as a table">
          <table class="plain">
            <thead>
              <tr>
                <th scope="col" class="number">
                  W ({unit})
                </th>
                {columns.map((entry) => (
                  <th scope="col" class="number" key={entry.name}>
                    {entry.name} ({entry.unit})
                  </th>
                ))}
              </tr>
            </thead>
            <tbody>
              {Array.from({ length: rows }, (_, row) => {
                const i = Math.round((row * ((shape?.w.length ?? 1) - 1)) / Math.max(1, rows - 1));
                return (
                  <tr key={i}>
                    <th scope="row" class="number">
                      {fixed((shape?.w[i] ?? 0) / per, 3)}
                    </th>
                    {columns.map((entry) => (
                      <td class="number" key={entry.name}>
                        {digits(entry.values[i] ?? Number.NaN, 4)}
                      </td>
                    ))}
                  </tr>
                );
              })}
            </tbody>
          </table>
        </div>
      )}
    </details>
  );
}
