/** Plan: what is still to be had, where the beam should stand for it, and for how long. */
import type { JSX } from "preact";
import { StudyBar } from "../fit/study-bar";
import { Switch } from "../parts/field";
import { combed } from "../plan/comb";
import { Goals } from "../plan/goals";
import { MachineFields } from "../plan/machine";
import { again, making, makePlan } from "../plan/make";
import { Caution, Next } from "../plan/next";
import { PlanOutcome } from "../plan/outcome";
import { Proof } from "../plan/proof";
import { plan } from "../state/plan";

/** The room. */
export function PlanRoom(): JSX.Element {
  return (
    <>
      {!combed() && (
        <fieldset>
          <legend>Plan</legend>
          <Next empty={<p class="empty">Where the hours left are worth most. Say below what they are for and what the machine allows.</p>} />
          <StudyBar study={making} words={plan.value === null ? "Plan the hours left" : "Plan again"} onRun={makePlan} />
          {plan.value !== null && <Switch label="Plan again after each point" on={again.value} onChange={(on) => (again.value = on)} />}
          <PlanOutcome />
          <Proof />
          <Caution />
        </fieldset>
      )}
      <Goals />
      <MachineFields />
      {combed() && <Caution />}
    </>
  );
}
