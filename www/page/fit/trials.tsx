/** Pseudo-experiments of the sheet as it stands: bias, pulls and coverage of what the fit quotes. */
import type { JSX } from "preact";
import { useId } from "preact/hooks";
import { signal } from "@preact/signals";
import type { CoverageOf } from "../../shared/generated/CoverageOf";
import type { ParameterSummary } from "../../shared/generated/ParameterSummary";
import type { Summary } from "../../shared/generated/Summary";
import { fixed, signed, THIN } from "../format/number";
import { Sym } from "../parts/sym";
import { Switch } from "../parts/field";
import { parametersOf, symbolOf } from "../state/parameters";
import { sheet } from "../state/sheet";
import { ask, lanesForLongWork } from "../state/work";
import { inLanes, ranges } from "./ranges";
import { study } from "./study";
import { StudyBar } from "./study-bar";
import { findings } from "./coverage";

/** Most trials from here: the rows of one summary travel in one request. */
const MOST = 100_000;

const trials = study<Summary>();
const count = signal("200");
const seed = signal("1");
const profiles = signal(false);

function whole(text: string, most: number): number | null {
  const value = Number(text);
  return /^\d+$/.test(text.trim()) && value <= most ? value : null;
}

function run(): void {
  const [many, from] = [whole(count.peek(), MOST), whole(seed.peek(), Number.MAX_SAFE_INTEGER)];
  if (many === null || from === null) return;
  const all = ranges(many, from, profiles.peek());
  void trials.run(async (now, { onProgress, ...options }) => {
    onProgress?.({ done: 0, total: many });
    const rows = await inLanes(
      all,
      lanesForLongWork(),
      async (range) => {
        const { body } = await ask({ kind: "trials", sheet: now, range }, options);
        if (body.kind !== "trials") throw new Error("no trials in the answer");
        return body.rows;
      },
      (done) => onProgress?.({ done, total: many }),
    );
    const { body } = await ask({ kind: "summary", sheet: now, rows }, options);
    if (body.kind !== "summary") throw new Error("no summary in the answer");
    return body.summary;
  });
}

/** Settings, button and table. */
export function Trials(): JSX.Element {
  const made = trials.made.value?.value;
  const ok = (whole(count.value, MOST) ?? 0) >= 2 && whole(seed.value, Number.MAX_SAFE_INTEGER) !== null;
  return (
    <fieldset>
      <legend>Trials</legend>
      <p class="note">
        Invented data of this scan with the sheet's present values as the truth, each fitted as the real ones. The same seed
        gives the same trials everywhere.
      </p>
      <div class="fields">
        <Whole label="Number of trials" state={count} allowed={`2 to ${MOST}`} ok={(whole(count.value, MOST) ?? 0) >= 2} />
        <Whole label="Seed" state={seed} allowed="a whole number" ok={whole(seed.value, Number.MAX_SAFE_INTEGER) !== null} />
      </div>
      <Switch label="Also the profile intervals (takes longer)" on={profiles.value} onChange={(on) => (profiles.value = on)} />
      <StudyBar study={trials} words="Run trials" onRun={run} disabled={!ok} />
      {made && <Result made={made} />}
    </fieldset>
  );
}

function Whole(props: { label: string; state: typeof count; allowed: string; ok: boolean }): JSX.Element {
  const id = useId();
  return (
    <div class="field">
      <label for={id}>{props.label}</label>
      <input
        id={id}
        type="text"
        inputMode="numeric"
        autocomplete="off"
        value={props.state.value}
        aria-invalid={props.ok ? undefined : "true"}
        aria-describedby={props.ok ? undefined : `${id}p`}
        onInput={(event) => (props.state.value = event.currentTarget.value)}
      />
      {!props.ok && (
        <p class="problem" id={`${id}p`} role="status">
          Allowed: {props.allowed}.
        </p>
      )}
    </div>
  );
}

function Result({ made }: { made: Summary }): JSX.Element {
  const levels = made.parameters[0]?.curvature ?? [];
  const profiled = made.parameters[0]?.profile ?? [];
  const names = new Map(parametersOf(sheet.value).map(({ id, name }) => [id, name]));
  return (
    <>
      <div class="table-box" tabIndex={0} role="region" aria-label="Bias, pulls and coverage">
        <table class="plain trials">
          <thead>
            <tr>
              <th scope="col">Parameter</th>
              <th scope="col" class="number">Bias, errors</th>
              <th scope="col" class="number">Pull mean</th>
              <th scope="col" class="number">Pull width</th>
              {levels.map((level) => (
                <th scope="col" class="number" key={level.nominal}>
                  In {percent(level.nominal)}
                </th>
              ))}
              {profiled.map((level) => (
                <th scope="col" class="number" key={level.nominal}>
                  Profile {percent(level.nominal)}
                </th>
              ))}
            </tr>
          </thead>
          <tbody>
            {made.parameters.map((parameter) => (
              <Row parameter={parameter} key={parameter.id} />
            ))}
          </tbody>
        </table>
      </div>
      <p class="note">
        {made.converged} of {made.trials} fits ended in a minimum; the others are in no number here. Coverage with its binomial
        interval (Wilson) of one standard deviation.
      </p>
      {findings(made, (id) => names.get(id) ?? id).map((words) => (
        <p class="problem" key={words}>
          {words}
        </p>
      ))}
    </>
  );
}

function Row({ parameter }: { parameter: ParameterSummary }): JSX.Element {
  return (
    <tr>
      <th scope="row">
        <Sym text={symbolOf(parameter.id, sheet.value)} />
      </th>
      <td class="number">{pair(parameter.bias / parameter.mean_error, parameter.bias_error / parameter.mean_error)}</td>
      <td class="number">{pair(parameter.pull_mean, parameter.pull_mean_error)}</td>
      <td class="number">
        {fixed(parameter.pull_width, 2)} ±{THIN}
        {fixed(parameter.pull_width_error, 2)}
      </td>
      {[...parameter.curvature, ...parameter.profile].map((level, i) => (
        <td class="number" key={i}>
          <Coverage level={level} />
        </td>
      ))}
    </tr>
  );
}

function Coverage({ level }: { level: CoverageOf }): JSX.Element {
  if (level.trials === 0) return <>–</>;
  return (
    <>
      {percent(level.fraction)}
      <span class="quiet small"> ({fixed(level.low * 100, 1)} to {fixed(level.high * 100, 1)})</span>
    </>
  );
}

function pair(value: number, error: number): string {
  return `${signed(value, 2)} ±${THIN}${fixed(error, 2)}`;
}

function percent(share: number): string {
  return `${fixed(share * 100, 1)}${THIN}%`;
}
