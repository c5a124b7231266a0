/** A table from elsewhere: shown as it was understood, asked about where it is unclear, and only then counted. */
import type { JSX } from "preact";
import { useSignal } from "@preact/signals";
import { useEffect, useRef } from "preact/hooks";
import { Refused } from "../bridge/failures";
import { Icon } from "../parts/icon";
import { change, sheet } from "../state/sheet";
import type { Body, Row } from "../state/types";
import { ask } from "../state/work";

type Understood = Extract<Body, { kind: "rows" }>;

/** A text longer than this is not laid out as a whole: ten thousand lines in a box would hold everything up. */
const LONG = 40_000;
/** Lines of it that are shown. */
const HEAD = 30;

function head(text: string): string {
  return `${text.split("\n", HEAD).join("\n")}\n…`;
}

function many(rows: number): string {
  return rows === 1 ? "1 row" : `${rows} rows`;
}

function lines(text: string): number {
  return text.trimEnd().split("\n").length;
}

/** The dialog. */
export function PasteDialog({ close }: { close: () => void }): JSX.Element {
  const dialog = useRef<HTMLDialogElement>(null);
  const text = useSignal("");
  const answersGiven = useSignal<[string, string][]>([]);
  const understood = useSignal<Understood | null>(null);
  const refused = useSignal("");

  useEffect(() => {
    dialog.current?.showModal();
  }, []);

  useEffect(() => {
    if (text.value.trim() === "") {
      understood.value = null;
      refused.value = "";
      return;
    }
    let wanted = true;
    ask({ kind: "read_table", sheet: sheet.peek(), text: text.value, answers: answersGiven.value }).then(
      ({ body }) => {
        if (!wanted || body.kind !== "rows") return;
        understood.value = body;
        refused.value = "";
      },
      (reason: unknown) => {
        if (!wanted) return;
        understood.value = null;
        refused.value = reason instanceof Refused ? reason.message : String(reason);
      },
    );
    return () => {
      wanted = false;
    };
  }, [text.value, answersGiven.value]);

  const long = text.value.length >= LONG;
  const read = understood.value;
  const open = read?.columns.filter((column) => column.question !== "") ?? [];
  // What is here already and stays as it is is in no list of changes.
  const fresh = read?.changes.filter((row) => row.new).length ?? 0;
  const known = (read?.rows.length ?? 0) - fresh;
  const changed = (read?.changes.length ?? 0) - fresh;
  const ready = read !== null && open.length === 0 && read.rows.length > 0;
  return (
    <dialog class="sheet-of-paper" aria-labelledby="paste-title" ref={dialog} onClose={close}>
      <div class="dialog-head">
        <h2 id="paste-title">Paste or load a table</h2>
        <button type="button" class="tool" aria-label="Close" onClick={close}>
          <Icon name="close" />
        </button>
      </div>
      <div class="field field-wide">
        <label for="paste-text">Cells from a spreadsheet, or the text of a CSV file, with a header line</label>
        <textarea
          id="paste-text"
          rows={7}
          spellcheck={false}
          value={long ? head(text.value) : text.value}
          readOnly={long}
          aria-describedby="paste-length"
          onPaste={(event) => {
            const pasted = event.clipboardData?.getData("text/plain") ?? "";
            if (pasted.length < LONG) return;
            event.preventDefault();
            text.value = pasted;
          }}
          placeholder={"W (MeV)\tL (nb^-1)\tn\n2873.2\t129.6\t298\n2874.2\t97.2\t587"}
          onInput={(event) => (text.value = event.currentTarget.value)}
        />
        <p class="note" id="paste-length">
          {long && (
            <>
              The first {HEAD} of {lines(text.value)} lines are shown.{" "}
              <button type="button" class="link" onClick={() => (text.value = "")}>
                Take them out again
              </button>
            </>
          )}
        </p>
      </div>
      <div class="field field-wide">
        <label for="paste-file">or a file</label>
        <input
          id="paste-file"
          type="file"
          accept=".csv,.txt,.tsv,text/csv,text/plain"
          onChange={(event) => {
            void event.currentTarget.files?.[0]?.text().then((content) => (text.value = content));
          }}
        />
      </div>
      <div role="status" aria-live="polite">
        {refused.value !== "" && <p class="problem">{refused.value}</p>}
        {read !== null && (
          <>
            <table class="plain">
              <caption>
                {many(read.rows.length)}
                {known > 0 && `, ${known} of them already here`}, understood as
              </caption>
              <thead>
                <tr>
                  <th scope="col">Column</th>
                  <th scope="col">means</th>
                  <th scope="col">unit of bare numbers</th>
                </tr>
              </thead>
              <tbody>
                {read.columns.map((column) => (
                  <tr key={column.header}>
                    <th scope="row">{column.header}</th>
                    <td>
                      {column.question === "" ? (
                        column.meaning.replace(/_/g, " ") || <span class="quiet">kept, not used</span>
                      ) : (
                        <label>
                          {column.question}{" "}
                          <select
                            value=""
                            onChange={(event) => {
                              const rest = answersGiven.value.filter(([header]) => header !== column.header);
                              answersGiven.value = [...rest, [column.header, event.currentTarget.value]];
                            }}
                          >
                            <option value="">Choose</option>
                            {column.choices.map((choice) => (
                              <option key={choice} value={choice}>
                                {choice.replace(/_/g, " ")}
                              </option>
                            ))}
                          </select>
                        </label>
                      )}
                    </td>
                    <td>{column.unit}</td>
                  </tr>
                ))}
              </tbody>
            </table>
            <Changes read={read} />
            {read.problems.slice(0, 8).map((problem) => (
              <p class="problem" key={problem.field}>
                {problem.field}: {problem.message}
              </p>
            ))}
            {read.problems.length > 8 && <p class="problem">and {read.problems.length - 8} more</p>}
          </>
        )}
      </div>
      <p class="actions">
        <button type="button" class="button button-main" disabled={!ready || fresh + changed === 0} onClick={() => take("add") && close()}>
          {fresh === 0 && known > 0
            ? changed > 0
              ? `Update ${many(changed)}`
              : "Nothing differs"
            : changed > 0
              ? `Update ${changed}, add ${many(fresh)}`
              : `Add ${many(fresh)}`}
        </button>
        <button type="button" class="button" disabled={!ready} onClick={() => take("replace") && close()}>
          Replace all points by them
        </button>
      </p>
    </dialog>
  );

  function take(how: "add" | "replace"): boolean {
    const rows = understood.peek()?.rows ?? [];
    change(how === "add" ? `read ${many(rows.length)}` : `replace all points by ${many(rows.length)}`, (before) => ({
      ...before,
      data: { ...before.data, rows: how === "replace" ? rows : merged(before.data.rows, rows) },
    }));
    return true;
  }
}

/** What reading this table again would change. */
function Changes({ read }: { read: Understood }): JSX.Element | null {
  const cells = read.changes.flatMap((row) => (row.new ? [] : row.fields.map(([field = "", before = "", after = ""]) => ({ id: row.id, field, before, after }))));
  if (cells.length === 0) return null;
  return (
    <details>
      <summary>{cells.length === 1 ? "1 cell differs" : `${cells.length} cells differ`} from those here</summary>
      <ul class="list">
        {cells.slice(0, 40).map((cell) => (
          <li key={`${cell.id}${cell.field}`}>
            {cell.id}, {cell.field.replace(/_/g, " ")}: {cell.before || "nothing"} → {cell.after || "nothing"}
          </li>
        ))}
      </ul>
    </details>
  );
}

/** Rows with a known id take the place of the old one and keep its comment and flags; the others come after. */
function merged(before: readonly Row[], read: readonly Row[]): Row[] {
  const fresh = new Map(read.map((row) => [row.id, row]));
  const kept = before.map((old) => {
    const next = fresh.get(old.id);
    if (next === undefined) return old;
    fresh.delete(old.id);
    return { ...next, comment: old.comment || next.comment || "", left_out: old.left_out ?? false, running: old.running ?? false };
  });
  return [...kept, ...fresh.values()];
}
