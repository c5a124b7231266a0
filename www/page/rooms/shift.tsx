/** Shift: the running point, two numbers and Enter; expected so far, seen, p-value; the next setting. */
import type { JSX } from "preact";
import { useSignal } from "@preact/signals";
import { useId } from "preact/hooks";
import { hours } from "../format/number";
import { Quantity, units } from "../parts/quantity";
import * as answers from "../state/answers";
import { planned } from "../state/plan";
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
  const unit = columnUnit("luminosity");
  const bare = withoutUnit(row.luminosity ?? "", unit);
  const here = answers.points.value.find((point) => point.id === row.id) ?? null;
  const enter = (form: HTMLFormElement): void => {
    const values = new FormData(form);
    const n = String(values.get("n") ?? "").trim();
    const l = withUnit(String(values.get("l") ?? ""), unit);
    if (n !== (row.counts ?? "")) setCell(index, "counts", n);
    if (l !== (row.luminosity ?? "")) setCell(index, "luminosity", l);
  };
  const countsProblem = answers.problemAt(`data.rows[${index}].counts`);
  const lumiProblem = answers.problemAt(`data.rows[${index}].luminosity`);
  return (
    <fieldset>
      <legend>Running point {row.id}</legend>
      <form
        class="entry"
        onSubmit={(event) => {
          event.preventDefault();
          enter(event.currentTarget);
        }}
        onChange={(event) => enter(event.currentTarget)}
      >
        <div class="field">
          <label for={`${id}n`}>
            Counts <span class="sym">n</span>
          </label>
          <input id={`${id}n`} class="big" name="n" type="text" inputMode="numeric" autocomplete="off" defaultValue={row.counts ?? ""} key={`n${row.counts ?? ""}`} aria-invalid={countsProblem ? "true" : undefined} aria-describedby={`${id}p`} />
        </div>
        <div class="field">
          <label for={`${id}l`}>
            Luminosity <span class="sym">L</span> <span class="quiet">({units(unit)})</span>
          </label>
          <input id={`${id}l`} class="big" name="l" type="text" inputMode="decimal" autocomplete="off" defaultValue={bare} key={`l${row.luminosity ?? ""}`} aria-invalid={lumiProblem ? "true" : undefined} aria-describedby={`${id}p`} />
        </div>
        <button type="submit" class="button button-main">
          Enter
        </button>
        <p class="problem" id={`${id}p`} role="status">
          {[countsProblem?.message, lumiProblem?.message].filter(Boolean).join(" ")}
        </p>
      </form>
      {here !== null && <Health point={here} />}
      <div class="entry entry-close">
        <div class="field">
          <label for={`${id}c`}>Comment</label>
          <input id={`${id}c`} type="text" autocomplete="off" value={comment.value} onInput={(event) => (comment.value = event.currentTarget.value)} />
        </div>
        <button type="button" class="button" onClick={() => closeRow(index, comment.value)}>
          Close {row.id}
        </button>
      </div>
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
  const next = planned.value.find((stop) => stop.next);
  return (
    <fieldset>
      <legend>Next setting</legend>
      {next === undefined ? (
        <p class="empty">
          No plan yet.{" "}
          <button type="button" class="link" onClick={() => (room.value = "plan")}>
            Make one
          </button>
        </p>
      ) : (
        <>
          <p class="dial-line">
            <span class="figure">
              <Quantity text={next.dial} />
            </span>{" "}
            for {hours(next.hours)}
          </p>
          <p class="note">{next.why}</p>
          <p class="actions">
            <button type="button" class="button button-main" onClick={() => addRow({ setting: next.dial }, true)}>
              Accept and start
            </button>
          </p>
        </>
      )}
      <p class="note">
        Beam changes are made by the accelerator's operators under the facility's procedures. Radiation and machine protection
        are not modelled.
      </p>
    </fieldset>
  );
}
