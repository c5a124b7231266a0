/** Shift: the running point, two numbers and Enter; expected so far, seen, p-value; the next setting. */
import type { JSX } from "preact";
import { useSignal } from "@preact/signals";
import { useId } from "preact/hooks";
import { units } from "../parts/quantity";
import { Caution, Next } from "../plan/next";
import * as answers from "../state/answers";
import { room } from "../state/prefs";
import { addRow, closeRow, columnUnit, setCell, withoutUnit, withUnit } from "../state/rows";
import { rows, runningIndex } from "../state/sheet";
import { Health } from "./health";
import { FirstSteps } from "./first-steps";
import type { Row } from "../state/types";

/** The room. */
export function ShiftRoom(): JSX.Element {
  const index = runningIndex.value;
  const row = rows.value[index];
  return (
    <>
      <FirstSteps />
      {row === undefined ? <StartForm /> : <RunningForm key={row.id} row={row} index={index} />}
      <NextStop />
    </>
  );
}

function RunningForm({ row, index }: { row: Row; index: number }): JSX.Element {
  const id = useId();
  const comment = useSignal("");
  // What is being typed; `null`: what the sheet says. It reaches the sheet with Enter or on leaving the field.
  const n = useSignal<string | null>(null);
  const l = useSignal<string | null>(null);
  const unit = columnUnit("luminosity");
  const here = answers.points.value.find((point) => point.id === row.id) ?? null;
  const enter = (): void => {
    if (n.value !== null && n.value.trim() !== (row.counts ?? "")) setCell(index, "counts", n.value.trim());
    if (l.value !== null) {
      const text = withUnit(l.value, unit);
      if (text !== (row.luminosity ?? "")) setCell(index, "luminosity", text);
    }
    n.value = null;
    l.value = null;
  };
  const problems = ["counts", "luminosity"].map((field) => answers.problemAt(`data.rows[${index}].${field}`)?.message ?? "");
  return (
    <fieldset>
      <legend>Running point {row.id}</legend>
      <form
        class="entry"
        onSubmit={(event) => {
          event.preventDefault();
          enter();
        }}
        onChange={enter}
      >
        <div class="field">
          <label for={`${id}n`}>
            Counts <span class="sym">n</span>
          </label>
          <input
            id={`${id}n`}
            class="big"
            name="n"
            type="text"
            inputMode="numeric"
            autocomplete="off"
            value={n.value ?? row.counts ?? ""}
            aria-invalid={problems[0] ? "true" : undefined}
            aria-describedby={`${id}p`}
            onInput={(event) => (n.value = event.currentTarget.value)}
          />
        </div>
        <div class="field">
          <label for={`${id}l`}>
            Luminosity <span class="sym">L</span> <span class="quiet">({units(unit)})</span>
          </label>
          <input
            id={`${id}l`}
            class="big"
            name="l"
            type="text"
            inputMode="decimal"
            autocomplete="off"
            value={l.value ?? withoutUnit(row.luminosity ?? "", unit)}
            aria-invalid={problems[1] ? "true" : undefined}
            aria-describedby={`${id}p`}
            onInput={(event) => (l.value = event.currentTarget.value)}
          />
        </div>
        <button type="submit" class="button button-main">
          Enter
        </button>
        <p class="problem" id={`${id}p`} role="status">
          {problems.filter(Boolean).join(" ")}
        </p>
      </form>
      {here !== null && <Health point={here} />}
      <form
        class="entry entry-close"
        onSubmit={(event) => {
          event.preventDefault();
          closeRow(index, comment.value);
        }}
      >
        <div class="field">
          <label for={`${id}c`}>Comment</label>
          <input id={`${id}c`} type="text" autocomplete="off" value={comment.value} onInput={(event) => (comment.value = event.currentTarget.value)} />
        </div>
        <button type="submit" class="button">
          Close {row.id}
        </button>
      </form>
    </fieldset>
  );
}

function StartForm(): JSX.Element {
  const id = useId();
  const setting = useSignal("");
  const unit = columnUnit("setting");
  return (
    <fieldset>
      <legend>No point is running</legend>
      <form
        class="entry"
        onSubmit={(event) => {
          event.preventDefault();
          if (setting.value.trim() === "") return;
          addRow({ setting: withUnit(setting.value, unit) }, true);
        }}
      >
        <div class="field">
          <label for={id}>
            Setting on the dial <span class="quiet">({unit})</span>
          </label>
          <input id={id} class="big" type="text" inputMode="decimal" autocomplete="off" value={setting.value} onInput={(event) => (setting.value = event.currentTarget.value)} />
        </div>
        <button type="submit" class="button button-main">
          Start a point
        </button>
      </form>
    </fieldset>
  );
}

function NextStop(): JSX.Element {
  return (
    <fieldset>
      <legend>Next setting</legend>
      <Next
        empty={
          <p class="empty">
            No plan yet.{" "}
            <button type="button" class="link" onClick={() => (room.value = "plan")}>
              Make one
            </button>
          </p>
        }
      />
      <Caution />
    </fieldset>
  );
}
