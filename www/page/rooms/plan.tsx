/** Plan: what is still to be had, where the beam should stand for it, and for how long. */
import type { JSX } from "preact";
import { Choice, Field } from "../parts/field";
import { parametersOf } from "../state/parameters";
import { setField, sheet } from "../state/sheet";

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
            options={[["", "all free parameters together"], ...goals.map((parameter) => [parameter.id, `${parameter.symbol}, ${parameter.name}`] as const)]}
            onChange={(value) => setField("plan.goal", value === "" ? undefined : value, "goal of the plan")}
          />
          <Field optional path="plan.hours" label="Beam time left" example="33 h" />
          <Field optional path="plan.step" label="Step between settings" example="0.1 MeV" />
          <Field optional path="plan.from" label="W from" example="2870 MeV" />
          <Field optional path="plan.to" label="W to" example="2880 MeV" />
          <Field optional path="plan.dwell_step" label="Time in steps of" example="0.5 h" />
          <Field optional path="plan.least_dwell" label="At least" example="1 h" />
          <Field optional path="plan.settle" label="To settle, per change" example="20 min" />
        </div>
      </fieldset>
      <p class="note">
        Beam changes are made by the accelerator's operators under the facility's procedures. Radiation and machine protection
        are not modelled.
      </p>
    </>
  );
}
