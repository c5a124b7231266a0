/** What the time is for: errors of one or several quantities, telling two hypotheses apart, or finding a peak. */
import type { JSX } from "preact";
import { Choice, Field } from "../parts/field";
import { Sym } from "../parts/sym";
import { parametersOf, symbolOf } from "../state/parameters";
import { change, setField, sheet } from "../state/sheet";
import type { Sheet } from "../state/types";
import { Comb } from "./comb";

type Aim = "measure" | "tell" | "find";

function aimOf(now: Sheet): Aim {
  return now.plan.comb ? "find" : now.plan.rival ? "tell" : "measure";
}

function take(aim: Aim): void {
  change("what the plan is for", (before) => {
    const { comb: _comb, rival: _rival, ...rest } = before.plan;
    if (aim === "find") return { ...before, plan: { ...rest, comb: {} } };
    if (aim === "tell") return { ...before, plan: { ...rest, rival: { model: before.model, free: before.fit.free } } };
    return { ...before, plan: rest };
  });
}

/** The fields. */
export function Goals(): JSX.Element {
  const aim = aimOf(sheet.value);
  return (
    <fieldset>
      <legend>What the time is for</legend>
      <div class="fields">
        <Choice<Aim>
          wide
          label="Aim"
          value={aim}
          options={[
            ["measure", "measure: small errors"],
            ["tell", "tell two hypotheses apart"],
            ["find", "find a peak of unknown mass"],
          ]}
          onChange={take}
        />
      </div>
      {aim === "measure" && <Measure />}
      {aim === "tell" && <Rival />}
      {aim === "find" && <Comb />}
    </fieldset>
  );
}

function Measure(): JSX.Element {
  const { goal, goals = [] } = sheet.value.plan;
  const free = parametersOf(sheet.value).filter((parameter) => sheet.value.fit.free.includes(parameter.id));
  const splitting = free.filter((parameter) => parameter.id.endsWith(".mass"));
  const derived: [string, string][] = [
    ...free
      .filter((parameter) => parameter.id.endsWith(".strength"))
      .map(({ id }): [string, string] => [`${id} / ${id.replace("strength", "width")}`, `${symbolOf(id, sheet.value)} over width`]),
    ...splitting.slice(1).map(({ id }): [string, string] => [`${id} - ${splitting[0]?.id ?? ""}`, "difference of the masses"]),
  ];
  const options: [string, string][] = [...free.map(({ id, symbol, name }): [string, string] => [id, `${symbol.replace(/_/g, "")}, ${name}`]), ...derived];
  return (
    <>
      <div class="fields">
        <Choice
          wide
          label="Least error of"
          value={goal ?? ""}
          options={[["", goals.length > 0 ? "the quantities below" : "all free parameters together"], ...options]}
          onChange={(value) => setField("plan.goal", value === "" ? undefined : value, "goal of the plan")}
        />
      </div>
      {goals.map((_, i) => (
        <div class="fields goal-row" key={i}>
          <Field path={`plan.goals[${i}].quantity`} label="Quantity" example="r1.strength / r1.width" />
          <Field optional path={`plan.goals[${i}].wanted`} label="Wanted error" example="20 keV, or 2 %" />
          <Field optional path={`plan.goals[${i}].weight`} label="Weight" example="1" />
          <button
            type="button"
            class="button"
            onClick={() => setField("plan.goals", goals.length === 1 ? undefined : goals.filter((_, k) => k !== i), "remove a goal")}
          >
            Remove
          </button>
        </div>
      ))}
      <div class="fields">
        <Choice
          label="A further goal"
          value=""
          options={[["", "add…"], ...options]}
          onChange={(value) => value !== "" && setField("plan.goals", [...goals, { quantity: value }], "a further goal")}
        />
        <Field optional path="plan.others_share" label="Share kept for the others" example="0 %" hint="so that they stay determined" />
      </div>
    </>
  );
}

function Rival(): JSX.Element {
  const rival = sheet.value.plan.rival;
  if (!rival) return <></>;
  const other: Sheet = { ...sheet.value, model: rival.model, fit: { ...sheet.value.fit, free: rival.free } };
  const same = JSON.stringify(rival.model) === JSON.stringify(sheet.value.model);
  return (
    <>
      <p class="note">
        The rival is a copy of the model, kept with the sheet. {same ? "Both are the same now: change the model (a second resonance, the interference, the background, J), or the rival." : ""}
      </p>
      <dl class="inputs">
        <div>
          <dt>The sheet's hypothesis</dt>
          <dd>{inWords(sheet.value)}</dd>
        </div>
        <div>
          <dt>Its rival</dt>
          <dd>{inWords(other)}</dd>
        </div>
        <div>
          <dt>Free in the rival</dt>
          <dd>
            {rival.free.map((id, i) => (
              <span key={id}>
                {i > 0 && ", "}
                <Sym text={symbolOf(id, other)} />
              </span>
            ))}
          </dd>
        </div>
      </dl>
      <p class="actions">
        <button
          type="button"
          class="button"
          onClick={() =>
            change("change places with the rival", (before) => ({
              ...before,
              model: rival.model,
              fit: { ...before.fit, free: rival.free },
              plan: { ...before.plan, rival: { model: before.model, free: before.fit.free } },
            }))
          }
        >
          Change places
        </button>
        <button
          type="button"
          class="button"
          onClick={() => change("the model as the rival", (before) => ({ ...before, plan: { ...before.plan, rival: { model: before.model, free: before.fit.free } } }))}
        >
          Take the model as it is now
        </button>
      </p>
    </>
  );
}

function inWords(now: Sheet): string {
  const { resonances, coherent, incoherent, j } = now.model;
  const masses = resonances.map((resonance) => `${resonance.name} at ${resonance.mass}`).join(", ") || "no resonance";
  return `J = ${j}: ${masses}; ${coherent ? "interfering background" : "no interference"}${incoherent ? ", background beside it" : ""}`;
}
