/** No peak seen: limits on the strength over a window of masses, and the strongest excess with the look elsewhere. */
import type { JSX } from "preact";
import { useId } from "preact/hooks";
import { signal, type Signal } from "@preact/signals";
import type { GlobalSignificance } from "../../shared/generated/GlobalSignificance";
import type { Reply } from "../../shared/protocol";
import { axisScale, digits, fixed, pValue } from "../format/number";
import { Sym } from "../parts/sym";
import { sheet } from "../state/sheet";
import type { Sheet } from "../state/types";
import { ask } from "../state/work";
import { view } from "../state/view";
import { Numbers, Plot } from "./plot";
import { study } from "./study";
import { StudyBar } from "./study-bar";

/** Background-only pseudo-experiments behind the global significance, and their seed. */
const [TRIALS, SEED] = [400, 1];

interface Made {
  strongest: GlobalSignificance | null;
  columns: Reply["columns"];
  /** Strengths are Γ_in·B_f (the engine's unit is GeV), else B_in·B_f. */
  width: boolean;
}

/** A partial width is read in eV. */
const EV_PER_GEV = 1e9;

const search = study<Made>();
const profiled = study<{ interferes: boolean; columns: Reply["columns"]; width: boolean }>();
/** As typed; empty: what the axis shows. */
const from = signal("");
const to = signal("");
const masses = signal("60");

/** Button, limits and words. */
export function NoPeak(): JSX.Element {
  const { unit, per } = axisScale(view.value.from, view.value.to);
  const shown = { from: fixed(view.value.from / per, 2), to: fixed(view.value.to / per, 2) };
  const window = {
    from_gev: Number(from.value || shown.from) * per,
    to_gev: Number(to.value || shown.to) * per,
    masses: Number(masses.value),
    trials: TRIALS,
    seed: SEED,
  };
  const ok = window.from_gev > 0 && window.to_gev > window.from_gev && Number.isInteger(window.masses) && window.masses >= 2;
  const run = (): void => {
    void search.run(async (now, options) => {
      const { body, columns } = await ask({ kind: "window", sheet: now, window }, options);
      if (body.kind !== "window") throw new Error("no window in the answer");
      return { strongest: body.strongest, columns, width: now.model.resonances[0]?.strength.kind === "gamma_in_bf" };
    });
  };
  const made = search.made.value?.value;
  return (
    <fieldset>
      <legend>No peak?</legend>
      <p class="note">
        The first resonance is moved over the window and its strength limited at each mass. The signal is added without
        interference, to the backgrounds as they stand.
      </p>
      <div class="fields">
        <Typed label={`From (${unit})`} state={from} example={shown.from} />
        <Typed label={`To (${unit})`} state={to} example={shown.to} />
        <Typed label="Masses" state={masses} example="60" />
      </div>
      {!ok && <p class="problem">Allowed: two masses above 0, the second larger, and 2 to 2,000 masses between them.</p>}
      <StudyBar study={search} words="Search the window" onRun={run} disabled={!ok} />
      {made && <Limits made={made} />}
      <Profiled />
    </fieldset>
  );
}

function Typed(props: { label: string; state: Signal<string>; example: string }): JSX.Element {
  const id = useId();
  return (
    <div class="field">
      <label for={id}>{props.label}</label>
      <input
        id={id}
        type="text"
        inputMode="decimal"
        autocomplete="off"
        value={props.state.value}
        placeholder={props.example}
        onInput={(event) => (props.state.value = event.currentTarget.value)}
      />
    </div>
  );
}

function Limits({ made }: { made: Made }): JSX.Element | null {
  const strength = made.width ? "eV" : "";
  const columns = made.columns.map((column, i) => {
    if (!made.width || i === 0 || column.name === "local significance") return column;
    return { ...column, unit: strength, values: column.values.map((value) => value * EV_PER_GEV) };
  });
  const [mass, observed, ...band] = columns;
  if (mass === undefined || observed === undefined) return null;
  const { unit, per } = axisScale(mass.values[0] ?? 0, mass.values.at(-1) ?? 0);
  const x = mass.values.map((value) => value / per);
  const line = (values: ArrayLike<number> | undefined, look: "main" | "second" | "faint") => ({ x, y: values ?? [], look });
  return (
    <>
      <Plot
        words="Observed and expected limit on the strength over the mass; the numbers are in the table below."
        x={`mass (${unit})`}
        y={`limit, 95 % CLs${made.width ? " (eV)" : ""}`}
        from={0}
        lines={[...[0, 1, 3, 4].map((k) => line(band[k]?.values, "faint")), line(band[2]?.values, "second"), line(observed.values, "main")]}
      />
      <p class="note">
        Of the strength <Sym text={made.width ? "Γ_in·B_f" : "B_in·B_f"} />. Full line: observed; broken: expected without a signal, with one and
        two standard deviations around it (CLs, asymptotic). A gap: no point sees a signal there.
      </p>
      <p>{inWords(made.strongest)}</p>
      <Numbers name="Limits" columns={[{ name: "mass", unit, values: x }, ...columns.slice(1)]} most={60} />
    </>
  );
}

function inWords(found: GlobalSignificance | null): string {
  if (found === null) return "There is no excess anywhere in the window.";
  const { unit, per } = axisScale(found.mass_gev, found.mass_gev);
  return (
    `The strongest excess is at ${fixed(found.mass_gev / per, 2)} ${unit}: locally ${fixed(found.local_significance, 1)} standard deviations ` +
    `(p ${small(found.ln_local_p)}). Having looked over the whole window, globally ${fixed(Math.max(0, found.global_significance), 1)} ` +
    `(p ${small(found.ln_global_p)}; ${TRIALS} background-only trials, Gross and Vitells, arXiv:1005.1891).`
  );
}

/** A p-value by its natural logarithm: as a power of ten where it is too small to be a number. */
function small(ln: number): string {
  return ln > -7 ? pValue(Math.exp(ln)) : `10^${fixed(ln / Math.LN10, 1)}`;
}

/** Limit with every error and everything else that is free profiled; with a continuum, against its phase. */
function Profiled(): JSX.Element {
  const id = strengthOf(sheet.value);
  const run = (): void => {
    void profiled.run(async (now, options) => {
      const { body, columns } = await ask({ kind: "limit", sheet: now, parameter: id, places: 8 }, options);
      if (body.kind !== "limit") throw new Error("no limit in the answer");
      return { interferes: body.interferes, columns, width: id.endsWith("strength") && now.model.resonances[0]?.strength.kind === "gamma_in_bf" };
    });
  };
  const made = profiled.made.value?.value;
  const [phase, limit] = made?.columns ?? [];
  const values = limit ? Array.from(limit.values, (v) => (made?.width ? v * EV_PER_GEV : v)) : [];
  const unit = made?.width ? " eV" : "";
  return (
    <>
      <p class="note">At the present mass and width, with interference, all errors and all else that is free profiled:</p>
      <StudyBar study={profiled} words="Limit with every error" onRun={run} disabled={id === ""} />
      {made && phase && !made.interferes && <p class="limit">Upper limit (95 % CLs, asymptotic): {digits(values[0] ?? Number.NaN, 3)}{unit}.</p>}
      {made && phase && made.interferes && (
        <>
          <Plot words="Limit on the strength against the phase of the continuum." x="phase of the continuum (deg)" y={`limit, 95 % CLs${unit && ` (${unit.trim()})`}`} from={0} lines={[{ x: phase.values, y: values, look: "main" }]} />
          <Numbers name="Limit against the phase" columns={[phase, { name: "limit", unit: unit.trim(), values }]} most={8} />
        </>
      )}
    </>
  );
}

function strengthOf(now: Sheet): string {
  const kind = now.model.resonances[0]?.strength.kind;
  if (kind === "gamma_in_bf" || kind === "bin_bf") return "r1.strength";
  return kind === "branchings" ? "r1.b_in" : kind === "partial_widths" ? "r1.gamma_in" : "";
}
