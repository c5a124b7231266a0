/** The fit against time: estimates as the points came in, residuals against their start, and what hourly looks do. */
import type { JSX } from "preact";
import { signal } from "@preact/signals";
import type { Reply } from "../../shared/protocol";
import { fixed, signed } from "../format/number";
import { Choice } from "../parts/field";
import { units } from "../parts/quantity";
import type { Body } from "../state/types";
import { ask } from "../state/work";
import { Numbers, Plot } from "./plot";
import { study } from "./study";
import { StudyBar } from "./study-bar";

type Found = Extract<Body, { kind: "against_time" }>;

/** A drift of the residuals above that is worth a word, standard deviations. */
const DRIFTS = 2.5;
/** One-sided p of two standard deviations, and looks of a day. */
const [TWO_SIGMA, LOOKS] = [0.0228, 24];

const history = study<{ made: Found; columns: Reply["columns"] }>();
const looks = study<number>();
const shown = signal("");
const rate = signal("0.57");

function run(): void {
  void history.run(async (now, options) => {
    const { body, columns } = await ask({ kind: "against_time", sheet: now }, options);
    if (body.kind !== "against_time") throw new Error("no history in the answer");
    return { made: body, columns };
  });
}

function look(): void {
  void looks.run(async (_now, options) => {
    const { body } = await ask({ kind: "looks", rate_per_look: Number(rate.peek()), looks: LOOKS, p: TWO_SIGMA }, options);
    if (body.kind !== "looks") throw new Error("no looks in the answer");
    return body.p;
  });
}

/** Buttons and plots. */
export function AgainstTime(): JSX.Element {
  const found = history.made.value?.value;
  const chance = looks.made.value?.value;
  return (
    <fieldset>
      <legend>Against time</legend>
      <StudyBar study={history} words="Fit as it grew" onRun={run} />
      {found && <Grown made={found.made} columns={found.columns} />}
      <p class="note">Whoever looks every hour and stops at the first good look is fooled more often than the p-value says.</p>
      <div class="fields">
        <div class="field">
          <label for="looks-rate">Background counts an hour</label>
          <input id="looks-rate" type="text" inputMode="decimal" autocomplete="off" value={rate.value} onInput={(event) => (rate.value = event.currentTarget.value)} />
        </div>
      </div>
      <StudyBar study={looks} words="Chance in 24 looks" onRun={look} disabled={!(Number(rate.value) > 0)} />
      {chance !== undefined && (
        <p class="looks">
          Two standard deviations ({fixed(100 * TWO_SIGMA, 1)} % at one look) are reached by background alone in {fixed(100 * chance, 1)} % of days with{" "}
          {LOOKS} hourly looks.
        </p>
      )}
    </fieldset>
  );
}

function Grown({ made, columns }: { made: Found; columns: Reply["columns"] }): JSX.Element {
  const index = Math.max(0, made.parameters.findIndex((parameter) => parameter.id === shown.value));
  const parameter = made.parameters[index];
  const timed = made.fits.every((fit) => fit.start_h !== null);
  const x = made.fits.map((fit) => (timed ? (fit.start_h ?? 0) : fit.points));
  const value = made.fits.map((fit) => fit.parameters[index]?.value ?? Number.NaN);
  const error = made.fits.map((fit) => fit.parameters[index]?.error ?? Number.NaN);
  const [start, pull] = columns;
  const drift = made.drift ?? null;
  if (parameter === undefined) return <p class="empty">Nothing was free.</p>;
  const axis = timed ? "start of the newest point (h)" : "points so far";
  return (
    <>
      <Choice label="Parameter" value={parameter.id} options={made.parameters.map((p) => [p.id, p.name])} onChange={(id) => (shown.value = id)} />
      <Plot
        words={`Estimate of ${parameter.name} as the points came in, with its error.`}
        x={axis}
        y={`${parameter.name.replace(/ of .*/, "")}${parameter.unit ? ` (${units(parameter.unit)})` : ""}`}
        lines={[
          { x, y: value.map((v, i) => v - (error[i] ?? 0)), look: "faint" },
          { x, y: value.map((v, i) => v + (error[i] ?? 0)), look: "faint" },
          { x, y: value, look: "main" },
        ]}
      />
      <Numbers
        name="Estimates"
        columns={[
          { name: axis, unit: "", values: x },
          { name: parameter.name, unit: parameter.unit, values: value },
          { name: "error", unit: parameter.unit, values: error },
        ]}
        most={60}
        significant={7}
      />
      {start !== undefined && pull !== undefined && start.values.length > 1 && (
        <>
          <Plot words="Pull of each point against its start." x="start of the point (h)" y="pull" lines={[{ x: start.values, y: pull.values, look: "main" }]} levels={[[0, ""]]} />
          <p class={Math.abs(drift ?? 0) > DRIFTS ? "problem drift" : "note drift"}>
            {drift === null
              ? "Too few times to look for a drift."
              : `Drift of the pulls with time: ${signed(drift, 1)} standard deviations${Math.abs(drift) > DRIFTS ? ": something changes (efficiency, luminosity, energy). Look before quoting." : "."}`}
          </p>
        </>
      )}
      {start !== undefined && start.values.length === 0 && <p class="note">The rows bring no start: residuals against time need one (column Start).</p>}
    </>
  );
}
