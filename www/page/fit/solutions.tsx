/** Other parameter sets that describe the data as well, side by side. */
import type { JSX } from "preact";
import { fixed, THIN, withError } from "../format/number";
import { units } from "../parts/quantity";
import { Sym } from "../parts/sym";
import { symbolOf } from "../state/parameters";
import { withAt } from "../state/path";
import { change, sheet } from "../state/sheet";
import type { Body } from "../state/types";
import { ask } from "../state/work";
import { study } from "./study";
import { Cautions, StudyBar } from "./study-bar";

type Found = Extract<Body, { kind: "solutions" }>;
type Solution = Found["solutions"][number];

/** Below that difference in 2 NLL the data do not tell two solutions apart (one standard deviation). */
const NOT_TOLD_APART = 1;

const solutions = study<Found>();

function run(): void {
  void solutions.run(async (now, options) => {
    const { body } = await ask({ kind: "solutions", sheet: now }, options);
    if (body.kind !== "solutions") throw new Error("no solutions in the answer");
    return body;
  });
}

/** Button and table. */
export function Solutions(): JSX.Element {
  const made = solutions.made.value?.value;
  return (
    <fieldset>
      <legend>Other solutions</legend>
      <StudyBar study={solutions} words="Solutions" onRun={run} />
      {made && <SideBySide made={made} />}
    </fieldset>
  );
}

function SideBySide({ made }: { made: Found }): JSX.Element {
  const sets = made.solutions;
  const alike = sets.filter((set) => set.above_best < NOT_TOLD_APART).length;
  return (
    <>
      <div class="table-box" tabIndex={0} role="region" aria-label="Solutions side by side">
        <table class="plain solutions">
          <thead>
            <tr>
              <th scope="col">Parameter</th>
              {sets.map((_, i) => (
                <th scope="col" class="number" key={i}>
                  Solution {i + 1}
                </th>
              ))}
            </tr>
          </thead>
          <tbody>
            {sets[0]?.parameters.map((parameter, row) => (
              <tr key={parameter.id}>
                <th scope="row" title={parameter.name}>
                  <Sym text={symbolOf(parameter.id, sheet.value)} />
                </th>
                {sets.map((set, i) => (
                  <td class="number" key={i}>
                    <Value of={set.parameters[row]} />
                  </td>
                ))}
              </tr>
            ))}
            <tr>
              <th scope="row">2 NLL above the best</th>
              {sets.map((set, i) => (
                <td class="number strong" key={i}>
                  {fixed(Math.max(0, set.above_best), 2)}
                </td>
              ))}
            </tr>
            <tr>
              <th scope="row">
                <span class="unseen">Action</span>
              </th>
              {sets.map((set, i) => (
                <td class="number" key={i}>
                  <button type="button" class="link" aria-label={`Use as the hypothesis: solution ${i + 1}`} onClick={() => use(set, i + 1)}>
                    Use as the hypothesis
                  </button>
                </td>
              ))}
            </tr>
          </tbody>
        </table>
      </div>
      {alike > 1 && (
        <p class="problem">
          {alike} solutions describe the data equally well. Quote all of them; the energies of this scan do not tell them apart.
        </p>
      )}
      <p class="note">{made.note}</p>
      <Cautions warnings={made.warnings} />
    </>
  );
}

function Value({ of }: { of: Solution["parameters"][number] | undefined }): JSX.Element | null {
  if (of === undefined) return null;
  const text = withError(of.value, of.error, { unit: of.unit, per: 1 });
  return (
    <>
      {text.value}
      {text.error !== "" && ` ±${THIN}${text.error}`}
      {of.unit && <span class="unit"> {units(of.unit)}</span>}
      {of.at_limit && <span class="bad"> at its limit</span>}
    </>
  );
}

function use(set: Solution, number: number): void {
  change(`use solution ${number} as the hypothesis`, (before) =>
    set.parameters.reduce((next, parameter) => withAt(next, parameter.field, parameter.text), before),
  );
}
