/** Other parameter sets that describe the data as well, side by side. */
import type { JSX } from "preact";
import { axisScale, fixed, hours, THIN, withError } from "../format/number";
import { Quantity, units } from "../parts/quantity";
import { Sym } from "../parts/sym";
import { symbolOf } from "../state/parameters";
import { withAt } from "../state/path";
import { change, sheet } from "../state/sheet";
import type { Body } from "../state/types";
import { ask } from "../state/work";
import { view } from "../state/view";
import { Plot } from "./plot";
import { study } from "./study";
import { Cautions, StudyBar } from "./study-bar";

type Found = Extract<Body, { kind: "solutions" }>;
type Solution = Found["solutions"][number];

/** Below that difference in 2 NLL the data do not tell two solutions apart (one standard deviation). */
const NOT_TOLD_APART = 1;

interface Drawn {
  x: ArrayLike<number>;
  y: ArrayLike<number>;
}

const solutions = study<Found>();
const curves = study<Drawn[]>();

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
      {made.separated.map((at) => (
        <p class="note separated" key={at.solution}>
          Solution {at.solution + 1} is told from the best one soonest at <Quantity text={at.dial} />: {at.hours > 0.05 ? hours(at.hours) : "minutes"} there to 3 standard
          deviations if nothing else is adjusted meanwhile, so at least
          {at.affordable === false && "; that is more than the plan has"}.
        </p>
      ))}
      {!made.exact && sets.length > 1 && made.separated.length === 0 && (
        <p class="note">Without a luminosity of the beam it cannot be told how many hours would separate them.</p>
      )}
      <p class="note">{made.note}</p>
      <Overlay made={made} />
      <Cautions warnings={made.warnings} />
    </>
  );
}

/** Curves of the solutions over each other. */
function Overlay({ made }: { made: Found }): JSX.Element | null {
  const drawn = curves.made.value?.value;
  if (made.solutions.length < 2) return null;
  const draw = (): void => {
    void curves.run(async (now, options) => {
      const { from, to } = view.peek();
      const found: Drawn[] = [];
      for (const set of made.solutions) {
        const other = set.parameters.reduce((next, parameter) => withAt(next, parameter.field, parameter.text), now);
        const { columns } = await ask({ kind: "curve", sheet: other, from_gev: from, to_gev: to, points: 161 }, options);
        found.push({ x: columns[0]?.values ?? [], y: columns.find((column) => column.name === "observed")?.values ?? [] });
      }
      return found;
    });
  };
  const { unit, per } = axisScale(view.value.from, view.value.to);
  const looks = ["main", "second", "faint"] as const;
  return (
    <>
      <StudyBar study={curves} words="Draw them over each other" onRun={draw} />
      {drawn && (
        <Plot
          words="Observed cross sections of the solutions over each other."
          x={`W (${unit})`}
          y="observed (nb)"
          from={0}
          lines={drawn.map((line, i) => ({ x: Array.from(line.x, (w) => w / per), y: line.y, look: looks[Math.min(i, 2)] ?? "faint" }))}
        />
      )}
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
