/** The next setting and why, in the plan's words; staying at the running point against it. */
import type { JSX } from "preact";
import { clock, hours, percent } from "../format/number";
import { Quantity } from "../parts/quantity";
import { accept, nextStop, plan } from "../state/plan";
import { runningIndex } from "../state/sheet";

/** What the plan would do now; `empty` is shown before there is a plan. */
export function Next({ empty }: { empty: JSX.Element }): JSX.Element {
  const next = nextStop.value;
  const made = plan.value;
  if (made === null) return empty;
  if (next === null) return <p class="empty">Every stop of the plan has been begun.</p>;
  return (
    <>
      <p class="dial-line">
        <span class="figure">
          <Quantity text={next.dial} />
        </span>{" "}
        for {hours(next.hours)}, {clock(next.at)} to {clock(next.at + next.hours * 3.6e6)}
      </p>
      <p class="note" data-why>
        {next.why}
      </p>
      <p class="actions">
        <button type="button" class="button button-main" onClick={() => accept(next)}>
          Accept and start
        </button>
      </p>
      <StayOrMove />
    </>
  );
}

function StayOrMove(): JSX.Element | null {
  const stay = plan.value?.stay;
  if (!stay || runningIndex.value < 0) return null;
  const [better, worse, loss] =
    stay.loss_by_staying <= stay.loss_by_moving ? ["Stay", "moving on", stay.loss_by_moving] : ["Move on", "staying", stay.loss_by_staying];
  return (
    <p class="note" data-stay>
      <strong>{better}.</strong> For another {hours(stay.hours)}, {worse} would lose {percent(loss as number)} of the information
      that the best use of the rest can bring.
    </p>
  );
}

/** What the plan does not know. */
export function Caution(): JSX.Element {
  return (
    <p class="note">
      Beam changes are made by the accelerator's operators under the facility's procedures. Radiation and machine protection are
      not modelled.
    </p>
  );
}
