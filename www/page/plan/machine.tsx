/** The machine as it is, and what every plan must contain. */
import type { JSX } from "preact";
import { Choice, Field } from "../parts/field";
import { textAt } from "../state/path";
import { setField, sheet } from "../state/sheet";

/** The fields. */
export function MachineFields(): JSX.Element {
  return (
    <fieldset>
      <legend>Time as it is</legend>
      <div class="fields">
        <Field optional path="plan.hours" label="Hours on the clock" example="33 h" />
        <Field optional path="plan.starts" label="They begin at" example="when the first stop starts" />
        <Field optional path="plan.hours_used" label="Of these, used up" example="by the clock" />
        <Field optional path="plan.from" label="W from" example="2870 MeV" />
        <Field optional path="plan.to" label="W to" example="2880 MeV" />
        <Field optional path="plan.step" label="Step between settings" example="0.1 MeV" />
        <Field optional path="plan.dwell_step" label="Dwell in steps of" example="0.5 h" />
        <Field optional path="plan.least_dwell" label="At least" example="1 h" />
        <Field optional path="plan.settle" label="To settle, per change" example="20 min" />
        <Field optional path="plan.stands_at" label="W where it stands now" example="the last row's" />
        <Field optional path="plan.fill" label="Beam of one fill" example="continuous" />
        <Field optional path="plan.refill" label="Until the next fill" example="1 h" />
        <Field optional path="plan.lifetime" label="Luminosity lifetime" example="6 h" />
      </div>
      <details>
        <summary>Times without beam</summary>
        <Pairs list="blocked" first="From, after they began" second="Until" examples={["8 h", "10 h"]} add="A time without beam" paths={["[0]", "[1]"]} fresh={["8 h", "10 h"]} />
      </details>
      <details>
        <summary>Luminosity against energy</summary>
        <Pairs
          list="luminosity_at"
          first="W"
          second="Luminosity"
          examples={["2870 MeV", "9e30 cm^-2 s^-1"]}
          add="A luminosity at an energy"
          paths={["[0]", "[1]"]}
          fresh={[sheet.value.plan.from ?? "", sheet.value.beam.luminosity ?? ""]}
        />
      </details>
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
          <Field optional path="plan.truths" label="Truths to plan for" example="16" hint="1: the best guess alone" />
        </div>
      </details>
    </fieldset>
  );
}

interface PairsProps {
  list: "blocked" | "luminosity_at";
  first: string;
  second: string;
  examples: [string, string];
  paths: [string, string];
  add: string;
  fresh: [string, string];
}

/** A list of pairs of quantities. */
function Pairs({ list, first, second, examples, paths, add, fresh }: PairsProps): JSX.Element {
  const pairs = sheet.value.plan[list] ?? [];
  return (
    <>
      {pairs.map((_, i) => (
        <div class="fields goal-row" key={i}>
          <Field path={`plan.${list}[${i}]${paths[0]}`} label={first} example={examples[0]} />
          <Field path={`plan.${list}[${i}]${paths[1]}`} label={second} example={examples[1]} />
          <button type="button" class="button" onClick={() => setField(`plan.${list}`, pairs.length === 1 ? undefined : pairs.filter((_, k) => k !== i), `remove: ${add}`)}>
            Remove
          </button>
        </div>
      ))}
      <p class="actions">
        <button type="button" class="button" onClick={() => setField(`plan.${list}`, [...pairs, fresh], add)}>
          {add}
        </button>
      </p>
    </>
  );
}
