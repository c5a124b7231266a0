/** Plan: what is still to be had, where the beam should stand for it, and for how long. */
import type { JSX } from "preact";
import { Choice, Field } from "../parts/field";
import { parametersOf } from "../state/parameters";
import { setField, sheet } from "../state/sheet";
import { textAt } from "../state/path";

/** The room. */
export function PlanRoom(): JSX.Element {
  const goal = sheet.value.plan.goal ?? "";
  const goals = parametersOf(sheet.value).filter((parameter) => sheet.value.fit.free.includes(parameter.id));
  return (
    <>
      <fieldset>
        <legend>What the time is for</legend>
        <div class="fields">
          <Choice
            wide
            label="Least error of"
            value={goal}
            options={[["", "all free parameters together"], ...goals.map((parameter) => [parameter.id, `${parameter.symbol.replace(/_/g, "")}, ${parameter.name}`] as const)]}
            onChange={(value) => setField("plan.goal", value === "" ? undefined : value, "goal of the plan")}
          />
          <Field optional path="plan.hours" label="Hours on the clock" example="33 h" />
          <Field optional path="plan.hours_used" label="Of these, used up" example="0 h" />
          <Field optional path="plan.from" label="W from" example="2870 MeV" />
          <Field optional path="plan.to" label="W to" example="2880 MeV" />
          <Field optional path="plan.step" label="Step between settings" example="0.1 MeV" />
          <Field optional path="plan.others_share" label="Share kept for the others" example="0 %" hint="so that they stay determined" />
        </div>
      </fieldset>
      <fieldset>
        <legend>Time as it is</legend>
        <div class="fields">
          <Field optional path="plan.dwell_step" label="Dwell in steps of" example="0.5 h" />
          <Field optional path="plan.least_dwell" label="At least" example="1 h" />
          <Field optional path="plan.settle" label="To settle, per change" example="20 min" />
          <Field optional path="plan.stands_at" label="W where it stands now" example="2874.2 MeV" />
          <Field optional path="plan.fill" label="Beam of one fill" example="continuous" />
          <Field optional path="plan.refill" label="Until the next fill" example="1 h" />
          <Field optional path="plan.lifetime" label="Luminosity lifetime" example="6 h" />
        </div>
        <details>
          <summary>Hysteresis and calibrations</summary>
          <div class="fields">
            <Field optional path="plan.settle_up" label="More, per step up" example="0 min" />
            <Field optional path="plan.settle_down" label="More, per step down" example="0 min" />
            <Choice
              label="Within a fill energies go"
              value={textAt(sheet.value, "plan.one_way")}
              options={[
                ["", "either way"],
                ["up", "only up"],
                ["down", "only down"],
              ]}
              onChange={(value) => setField("plan.one_way", value === "" ? undefined : value, "direction within a fill")}
            />
            <Field optional path="plan.calibration_every" label="Calibration after each" example="8 h" />
            <Field optional path="plan.calibration_time" label="It lasts" example="1 h" />
          </div>
        </details>
        <details>
          <summary>What every plan must contain</summary>
          <div class="fields">
            <Field optional path="plan.least_distinct" label="Distinct energies, at least" example="3" />
            <Field optional path="plan.reference" label="This W in every fill" example="none" />
            <Field optional path="plan.both_flanks_of" label="Both sides of this W in every fill" example="none" />
            <Field optional path="plan.off_hours" label="Hours off resonance, at least" example="0 h" />
            <Field optional path="plan.off_below" label="Off is below" example="2860 MeV" />
            <Field optional path="plan.off_above" label="or above" example="2890 MeV" />
          </div>
        </details>
        <details>
          <summary>Errors of a visit, and what is not known</summary>
          <div class="fields">
            <Field optional path="plan.visit_energy_error" label="Energy error of a visit" example="20 keV" />
            <Field optional path="plan.visit_luminosity_error" label="Luminosity error of a visit" example="1 %" />
            <Field optional path="plan.truths" label="Truths to plan for" example="1" hint="1: the best guess alone" />
          </div>
        </details>
      </fieldset>
      <p class="note">
        Beam changes are made by the accelerator's operators under the facility's procedures. Radiation and machine protection
        are not modelled.
      </p>
    </>
  );
}
