/** The points: typed, pasted or loaded; every cell kept as typed; what the chain makes of it beside it. */
import type { JSX } from "preact";
import { computed, useSignal } from "@preact/signals";
import { useLayoutEffect, useRef } from "preact/hooks";
import { Icon } from "../parts/icon";
import { Switch } from "../parts/field";
import * as answers from "../state/answers";
import { addRow, columnUnit } from "../state/rows";
import { allColumns } from "../state/prefs";
import { rows as allRows } from "../state/sheet";
import { columnsOf } from "./columns";
import { PasteDialog } from "./paste";
import { RowView } from "./row";

/** Height of one row, CSS pixels; the rows that are not seen are not built. */
const ROW_PX = 38;
/** Rows built above and below what is seen. */
const SPARE = 8;
/** Up to so many rows all are built and the page scrolls; above, the table scrolls by itself. */
const ALL = 60;

const shownColumns = computed(() => columnsOf(allRows.value, allColumns.value));

/** The table with its actions. */
export function DataTable(): JSX.Element {
  const box = useRef<HTMLDivElement>(null);
  const top = useSignal(0);
  const seen = useSignal(600);
  const pasting = useSignal(false);
  const rows = allRows.value;
  const columns = shownColumns.value;
  const windowed = rows.length > ALL;
  const first = windowed ? Math.max(0, Math.floor(top.value / ROW_PX) - SPARE) : 0;
  const last = windowed ? Math.min(rows.length, Math.ceil((top.value + seen.value) / ROW_PX) + SPARE) : rows.length;

  useLayoutEffect(() => {
    if (box.current !== null) seen.value = box.current.clientHeight;
  }, [windowed]);

  return (
    <section class="points" aria-labelledby="points-title">
      <div class="section-head">
        <h2 id="points-title">Points</h2>
        <div class="actions">
          <Switch label="All columns" on={allColumns.value} onChange={(on) => (allColumns.value = on)} />
          <button type="button" class="button" onClick={() => (pasting.value = true)}>
            <Icon name="table" /> Paste or load
          </button>
          <button type="button" class="button" onClick={() => addRow(rows.length === 0 ? {} : { luminosity_source: rows.at(-1)?.luminosity_source ?? null }, false)}>
            <Icon name="plus" /> Add a point
          </button>
        </div>
      </div>
      {rows.length === 0 ? (
        <p class="empty">
          No points yet. Paste a table from a spreadsheet, load a CSV file, or add a point and type its setting, luminosity and
          counts. Numbers keep the unit you type; a bare number in luminosity means {columnUnit("luminosity")}.
        </p>
      ) : (
        <div
          class={windowed ? "table-box table-box-long" : "table-box"}
          ref={box}
          tabIndex={0}
          role="region"
          aria-label="Table of points"
          onScroll={(event) => {
            if (windowed) top.value = event.currentTarget.scrollTop;
          }}
        >
          <table class="data" aria-rowcount={rows.length + 1}>
            <thead>
              <tr>
                <th scope="col">Use</th>
                {columns.filter((column) => column.field !== "comment").map((column) => (
                  <th scope="col" key={column.field} class={column.number ? "number" : ""}>
                    {column.title}
                  </th>
                ))}
                <th scope="col" class="number">
                  Expected
                </th>
                <th scope="col" class="number">
                  Pull
                </th>
                <th scope="col">Comment</th>
                <th scope="col">
                  <span class="unseen">Actions</span>
                </th>
              </tr>
            </thead>
            <tbody>
              {first > 0 && <Gap px={first * ROW_PX} />}
              {rows.slice(first, last).map((row, i) => (
                <RowView key={row.id || `#${first + i}`} row={row} index={first + i} columns={columns} point={answers.pointOf(row.id)} />
              ))}
              {last < rows.length && <Gap px={(rows.length - last) * ROW_PX} />}
            </tbody>
          </table>
        </div>
      )}
      {pasting.value && <PasteDialog close={() => (pasting.value = false)} />}
    </section>
  );
}

function Gap({ px }: { px: number }): JSX.Element {
  return (
    <tr aria-hidden="true">
      <td colSpan={99} style={{ height: `${px}px`, padding: "0" }} />
    </tr>
  );
}
