/** Proof by experiment: the plan, equal times and a steered shift as pseudo-experiments, expected against found. */
import type { JSX } from "preact";
import { signal } from "@preact/signals";
import type { Steering } from "../../shared/generated/Steering";
import type { Summary } from "../../shared/generated/Summary";
import { inLanes, ranges } from "../fit/ranges";
import { study } from "../fit/study";
import { StudyBar } from "../fit/study-bar";
import { digits, fixed, THIN } from "../format/number";
import { units } from "../parts/quantity";
import { Sym } from "../parts/sym";
import { symbolOf } from "../state/parameters";
import { plan } from "../state/plan";
import { sheet } from "../state/sheet";
import { ask, lanesForLongWork } from "../state/work";
import { withHoursUsed } from "./make";

/** Trials of a shift that is planned again after each point: each takes as long as some hundred others. */
const FEW = 24;
const SEED = 1;

const proof = study<Partial<Record<Steering, Summary>>>();
const steered = signal(false);
const count = signal("200");
const MOST = 100_000;

/** Trials asked for, or null if that is no number. */
function many(): number | null {
  const value = Number(count.value);
  return /^\d+$/.test(count.value.trim()) && value >= 2 && value <= MOST ? value : null;
}

function run(): void {
  const made = plan.peek();
  const asked = many();
  if (made === null || asked === null) return;
  const kinds: [Steering, number][] = [
    ["timetable", asked],
    ["uniform", asked],
    ...(steered.peek() ? [["again", FEW] satisfies [Steering, number]] : []),
  ];
  const total = kinds.reduce((sum, [, trials]) => sum + trials, 0);
  void proof.run(async (now, { onProgress, ...options }) => {
    const sheetNow = withHoursUsed(now);
    const found: Partial<Record<Steering, Summary>> = {};
    let before = 0;
    onProgress?.({ done: 0, total });
    for (const [steering, trials] of kinds) {
      const rows = await inLanes(
        steering === "again" ? Array.from({ length: trials / 2 }, (_, i) => ({ seed: SEED, first: 2 * i, count: 2, profiles: false })) : ranges(trials, SEED, false, 25),
        lanesForLongWork(),
        async (range) => {
          const { body } = await ask({ kind: "plan_trials", sheet: sheetNow, rows: made.raw.rows, steering, range }, options);
          if (body.kind !== "trials") throw new Error("no trials in the answer");
          return body.rows;
        },
        (done) => onProgress?.({ done: before + done, total }),
      );
      const { body } = await ask({ kind: "plan_summary", sheet: sheetNow, rows }, options);
      if (body.kind === "summary") found[steering] = body.summary;
      before += trials;
    }
    return found;
  });
}

/** Button and table. */
export function Proof(): JSX.Element | null {
  const made = plan.value;
  if (made === null) return null;
  const found = proof.made.value?.value;
  return (
    <details>
      <summary>Proof by experiment</summary>
      <p class="note">
        Invented data of this plan and of equal times, each fitted: does the error found agree with the one expected? The same
        number gives the same trials on every machine.
      </p>
      <div class="fields">
        <div class="field">
          <label for="proof-trials">Trials of each</label>
          <input
            id="proof-trials"
            type="text"
            inputMode="numeric"
            autocomplete="off"
            value={count.value}
            aria-invalid={many() === null ? "true" : undefined}
            aria-describedby={many() === null ? "proof-trials-problem" : undefined}
            onInput={(event) => (count.value = event.currentTarget.value)}
          />
          {many() === null && (
            <p class="problem" id="proof-trials-problem" role="status">
              Allowed: 2 to {MOST}.
            </p>
          )}
        </div>
      </div>
      <label class="switch">
        <input type="checkbox" checked={steered.value} onChange={(event) => (steered.value = event.currentTarget.checked)} />
        <span>Also whole shifts, planned again after every point ({FEW}, takes long)</span>
      </label>
      <StudyBar study={proof} words="Try it out" onRun={run} disabled={many() === null} />
      {found && (
        <div class="table-box" tabIndex={0} role="region" aria-label="Errors expected and found">
          <table class="plain proof">
            <thead>
              <tr>
                <th scope="col">Error of</th>
                <th scope="col" class="number">
                  plan: expected
                </th>
                <th scope="col" class="number">
                  found
                </th>
                <th scope="col" class="number">
                  equal: expected
                </th>
                <th scope="col" class="number">
                  found
                </th>
                {found.again && (
                  <th scope="col" class="number">
                    steered: found
                  </th>
                )}
                {found.again && (
                  <th scope="col" class="number">
                    its pull
                  </th>
                )}
                <th scope="col">unit</th>
              </tr>
            </thead>
            <tbody>
              {made.raw.parameters.map((raw) => {
                const shown = made.forecasts.find((forecast) => forecast.name === raw.name);
                const per = raw.planned && shown?.numbers.planned ? raw.planned / shown.numbers.planned : 1;
                return (
                  <tr key={raw.name}>
                    <th scope="row">
                      <Sym text={symbolOf(raw.name, sheet.value)} />
                    </th>
                    <td class="number">{digits(shown?.numbers.planned ?? Number.NaN, 3)}</td>
                    <td class="number strong">{spread(found.timetable, raw.name, per)}</td>
                    <td class="number">{digits(shown?.numbers.uniform ?? Number.NaN, 3)}</td>
                    <td class="number strong">{spread(found.uniform, raw.name, per)}</td>
                    {found.again && <td class="number strong">{spread(found.again, raw.name, per)}</td>}
                    {found.again && <td class="number">{pull(found.again, raw.name)}</td>}
                    <td>{units(shown?.unit ?? "")}</td>
                  </tr>
                );
              })}
            </tbody>
          </table>
        </div>
      )}
    </details>
  );
}

/** Standard deviation of the fitted values with its statistical error. */
function spread(summary: Summary | undefined, id: string, per: number): string {
  const found = summary?.parameters.find((parameter) => parameter.id === id);
  if (summary === undefined || found === undefined || summary.converged < 2) return "–";
  const value = found.spread / per;
  return `${digits(value, 3)} ±${THIN}${digits(value / Math.sqrt(2 * (summary.converged - 1)), 1)}`;
}

function pull(summary: Summary, id: string): string {
  const found = summary.parameters.find((parameter) => parameter.id === id);
  return found === undefined ? "–" : `${fixed(found.pull_mean, 2)}, ${fixed(found.pull_width, 2)} wide`;
}
