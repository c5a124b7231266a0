/** Counts in angular bins: edges for all rows, counts row by row. */
import type { JSX } from "preact";
import { signal } from "@preact/signals";
import { useId } from "preact/hooks";
import { problemAt } from "../state/answers";
import { change, sheet } from "../state/sheet";
import type { Row } from "../state/types";

const typed = signal<string | null>(null);

/** Numbers of a list, as typed. */
export function listOf(text: string): string[] {
  return text.split(/[\s,;]+/).filter((part) => part !== "");
}

/** Bins between neighbouring edges with their counts; `null` where the numbers do not go together. */
export function binsOf(edges: readonly string[], counts: readonly string[]): NonNullable<Row["angle_bins"]> | null {
  if (edges.length < 2 || counts.length !== edges.length - 1) return null;
  return counts.map((n, i) => ({ from: edges[i] ?? "", to: edges[i + 1] ?? "", counts: n }));
}

function edgesOf(rows: readonly Row[]): string {
  const bins = rows.find((row) => (row.angle_bins ?? []).length > 0)?.angle_bins ?? [];
  return bins.length === 0 ? "" : [...bins.map((bin) => bin.from), bins.at(-1)?.to].join(", ");
}

/** Edges, and a line of counts for each point. */
export function AngularBins(): JSX.Element {
  const id = useId();
  const rows = sheet.value.data.rows;
  const text = typed.value ?? edgesOf(rows);
  const edges = listOf(text);
  return (
    <fieldset>
      <legend>Angular bins</legend>
      <p class="note">
        Needs a hypothesis with angles (waves with helicities, diagrams, or J = 0). Only bins tell one J from another: a total
        rate measures (2J+1) B<sub>in</sub> B<sub>f</sub>.
      </p>
      <div class="fields">
        <div class="field field-wide">
          <label for={id}>Edges of |cos θ|, or of cos θ if one is below 0</label>
          <input id={id} type="text" autocomplete="off" value={text} placeholder="−1, 0, 1 for backward and forward; 0, 0.25, 0.5, 0.75, 1" onInput={(event) => (typed.value = event.currentTarget.value.replace(/−/g, "-"))} />
        </div>
      </div>
      {edges.length > 1 && (
        <details open={rows.some((row) => (row.angle_bins ?? []).length > 0)}>
          <summary>Counts in {edges.length - 1} bins</summary>
          <table class="plain">
            <thead>
              <tr>
                <th scope="col">Point</th>
                <th scope="col">Counts, one for each bin</th>
              </tr>
            </thead>
            <tbody>
              {rows.map((row, i) => (
                <Line row={row} index={i} edges={edges} key={row.id} />
              ))}
            </tbody>
          </table>
        </details>
      )}
    </fieldset>
  );
}

function Line({ row, index, edges }: { row: Row; index: number; edges: readonly string[] }): JSX.Element {
  const bins = row.angle_bins ?? [];
  const problem = problemAt(`data.rows[${index}].angle_bins`) ?? problemAt(`data.rows[${index}].counts`);
  return (
    <tr>
      <th scope="row">{row.id}</th>
      <td>
        <input
          type="text"
          class="cell-input"
          aria-label={`Counts in bins of ${row.id}`}
          defaultValue={bins.map((bin) => bin.counts).join(" ")}
          placeholder={`${edges.length - 1} numbers`}
          onChange={(event) => put(row.id, edges, listOf(event.currentTarget.value), event.currentTarget)}
        />
        {problem && <p class="problem">{problem.message}</p>}
      </td>
    </tr>
  );
}

function put(id: string, edges: readonly string[], counts: readonly string[], input: HTMLInputElement): void {
  const bins = counts.length === 0 ? [] : binsOf(edges, counts);
  input.setCustomValidity(bins === null ? `${edges.length - 1} numbers are needed, one for each bin.` : "");
  input.reportValidity();
  if (bins === null) return;
  change(`angular bins of ${id}`, (before) => ({
    ...before,
    data: {
      ...before.data,
      rows: before.data.rows.map((row) => {
        if (row.id !== id) return row;
        const { angle_bins: _old, counts: _total, ...rest } = row;
        return bins.length === 0 ? rest : { ...rest, angle_bins: bins };
      }),
    },
  }));
}
