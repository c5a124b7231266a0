/** What each point does to the fit: the fit without it, in errors. */
import type { JSX } from "preact";
import { pValue, signed } from "../format/number";
import { Quantity } from "../parts/quantity";
import { Sym } from "../parts/sym";
import { pointOf } from "../state/answers";
import { symbolOf } from "../state/parameters";
import { sheet } from "../state/sheet";
import type { Body } from "../state/types";
import { cursor } from "../state/view";
import { ask } from "../state/work";
import { study } from "./study";
import { Cautions, StudyBar } from "./study-bar";

type Found = Extract<Body, { kind: "influence" }>;

/** Points shown at first. */
const SHOWN = 12;
/** Counts of repeated points that follow one rate less often than that are worth a word. */
const UNLIKELY = 0.01;

const influence = study<Found>();

function run(): void {
  void influence.run(async (now, options) => {
    const { body } = await ask({ kind: "influence", sheet: now }, options);
    if (body.kind !== "influence") throw new Error("no influence in the answer");
    return body;
  });
}

/** Button and table. */
export function Influence(): JSX.Element {
  const made = influence.made.value?.value;
  return (
    <fieldset>
      <legend>What drives the fit</legend>
      <StudyBar study={influence} words="Leave out each point" onRun={run} />
      {made && <Points made={made} />}
    </fieldset>
  );
}

function Points({ made }: { made: Found }): JSX.Element {
  const largest = (shifts: readonly number[]): number => Math.max(0, ...shifts.map(Math.abs));
  const points = [...made.points].sort((a, b) => largest(b.shifts) - largest(a.shifts));
  const drive = points.filter((point) => point.drives).length;
  return (
    <>
      <p class={drive > 0 ? "problem" : "note"}>
        {drive === 0
          ? "No single point moves a parameter by more than its error."
          : `${drive === 1 ? "One point moves" : `${drive} points move`} a parameter by more than its error. Look at ${drive === 1 ? "it" : "them"} before quoting the result.`}
      </p>
      <div class="table-box" tabIndex={0} role="region" aria-label="The fit without each point">
        <table class="plain influence">
          <caption>
            Shift without the point, in errors{points.length > SHOWN && `; the ${SHOWN} largest of ${points.length}`}
          </caption>
          <thead>
            <tr>
              <th scope="col">Point</th>
              {made.parameters.map((parameter) => (
                <th scope="col" class="number" key={parameter.id}>
                  <Sym text={symbolOf(parameter.id, sheet.value)} />
                </th>
              ))}
              <th scope="col" class="number">2 NLL drops by</th>
            </tr>
          </thead>
          <tbody>
            {points.slice(0, SHOWN).map((point) => {
              const known = pointOf(point.id);
              return (
                <tr key={point.id} onMouseEnter={() => (cursor.value = known?.w ?? null)} onMouseLeave={() => (cursor.value = null)}>
                  <th scope="row" class={point.drives ? "bad" : ""}>
                    {known ? <Quantity text={known.dial} /> : point.id}
                    {point.drives && " drives"}
                  </th>
                  {point.shifts.map((shift, i) => (
                    <td class={Math.abs(shift) > 1 ? "number bad" : "number"} key={i}>
                      {signed(shift, 2)}
                    </td>
                  ))}
                  <td class="number">{signed(point.statistic_drop, 2)}</td>
                </tr>
              );
            })}
          </tbody>
        </table>
      </div>
      {made.repeats.map(([ids, p]) => (
        <p class={p < UNLIKELY ? "problem" : "note"} key={ids}>
          Taken at one energy: points {ids}; their counts follow one rate with p {pValue(p)}.
        </p>
      ))}
      <Cautions warnings={made.warnings} />
    </>
  );
}
