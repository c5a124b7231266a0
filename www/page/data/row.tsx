/** One row: a switch for its use, cells as typed, and what the chain makes of it. */
import type { JSX } from "preact";
import { Icon } from "../parts/icon";
import { Expected, Pull } from "../rooms/health";
import { problemAt, unread, type PointView } from "../state/answers";
import { removeRow, setCell, swapLuminosity, toggleRunning, toggleUse } from "../state/rows";
import type { Row } from "../state/types";
import { cursor } from "../state/view";
import type { ColumnView } from "./columns";

interface RowProps {
  row: Row;
  index: number;
  columns: readonly ColumnView[];
  point: PointView | null;
}

/** The row. */
export function RowView({ row, index, columns, point }: RowProps): JSX.Element {
  const kind = row.left_out ? "row-out" : row.running ? "row-running" : "";
  return (
    <tr
      class={kind}
      onMouseEnter={() => point !== null && (cursor.value = point.w)}
      onMouseLeave={() => (cursor.value = null)}
      onFocusIn={() => point !== null && (cursor.value = point.w)}
    >
      <td>
        <label class="tick">
          <input type="checkbox" checked={!row.left_out} aria-label={`Use ${row.id}`} onChange={() => toggleUse(index)} />
        </label>
      </td>
      {columns.map((column) => column.field !== "comment" && <Cell key={column.field} row={row} index={index} column={column} />)}
      <td class="number told">{point === null ? unread.value.has(row.id) && <span class="bad">no energy</span> : point.expected !== null && <Expected point={point} />}</td>
      <td class={`number told ${Math.abs(point?.pull ?? 0) > 3 ? "bad" : ""}`}>{point !== null && <Pull point={point} />}</td>
      {columns.map((column) => column.field === "comment" && <Cell key={column.field} row={row} index={index} column={column} />)}
      <td class="row-actions">
        <button type="button" class={row.running ? "tool tool-on" : "tool"} aria-pressed={row.running === true} aria-label={`${row.id} is running`} title="Running now" onClick={() => toggleRunning(index)}>
          <Icon name="next" />
        </button>
        {row.other_luminosity && (
          <button type="button" class="link" title={`Other luminosity: ${row.other_luminosity}`} onClick={() => swapLuminosity(index)}>
            swap L
          </button>
        )}
        <button type="button" class="tool" aria-label={`Remove ${row.id}`} title="Remove" onClick={() => removeRow(index)}>
          <Icon name="close" />
        </button>
      </td>
    </tr>
  );
}

function Cell({ row, index, column }: { row: Row; index: number; column: ColumnView }): JSX.Element {
  const problem = problemAt(`data.rows[${index}].${column.field}`);
  return (
    <td class={column.number ? "number" : ""}>
      <input
        class="cell-input"
        type="text"
        autocomplete="off"
        spellcheck={false}
        style={{ width: `${column.width + 1.5}ch` }}
        value={row[column.field] ?? ""}
        data-path={`data.rows[${index}].${column.field}`}
        aria-label={`${column.title} of ${row.id}`}
        aria-invalid={problem ? "true" : undefined}
        title={problem?.message ?? ""}
        onInput={(event) => setCell(index, column.field, event.currentTarget.value)}
        onKeyDown={(event) => {
          const step = event.key === "Enter" || event.key === "ArrowDown" ? 1 : event.key === "ArrowUp" ? -1 : 0;
          if (step !== 0) go(event.currentTarget, step, event);
        }}
      />
      {problem && <p class="problem">{problem.message}</p>}
    </td>
  );
}

/** Enter and the arrows move within the column, as in a spreadsheet. */
function go(from: HTMLInputElement, step: number, event: Event): void {
  const cell = from.closest("td");
  const row = cell?.parentElement;
  if (cell === null || row === null || row === undefined) return;
  const at = [...row.children].indexOf(cell);
  const next = step > 0 ? row.nextElementSibling : row.previousElementSibling;
  const input = next?.children[at]?.querySelector("input");
  if (!input) return;
  event.preventDefault();
  input.focus();
  input.select();
}
