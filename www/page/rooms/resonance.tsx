/** One resonance: mass, width, strength, phase on sliders; form, vertices and channels below. */
import type { JSX } from "preact";
import { Choice, Field, Switch } from "../parts/field";
import { around, Slider, within } from "../parts/slider";
import { Sym } from "../parts/sym";
import { typed, unitOf } from "../format/typed";
import { chooseForm, FORMS, FormFields, TwoBodies, widthFollows } from "../model/forms";
import { kindOf } from "../model/kinds";
import { WaveOf } from "../model/waves";
import { change, setField, sheet } from "../state/sheet";
import type { Resonance, Strength, Vertex } from "../state/types";

const STRENGTHS = [
  ["gamma_in_bf", "Γin · Bf"],
  ["bin_bf", "Bin · Bf"],
  ["branchings", "Bin and Bf"],
  ["partial_widths", "Γin and Γf"],
  ["one_width", "One width, the other from the form"],
  ["from_form", "Both from the form's couplings"],
] as const satisfies readonly (readonly [Strength["kind"], string])[];

type VertexKind = "default" | Vertex["kind"];
const VERTICES = [
  ["default", "As the form has it"],
  ["constant", "Constant"],
  ["one_photon", "One photon, M²/s"],
  ["massless", "Massless, s/M²"],
  ["running", "Running, two bodies"],
  ["own", "A channel of the form"],
] as const satisfies readonly (readonly [VertexKind, string])[];

/** The card of one resonance. */
export function ResonanceCard(props: { index: number; resonance: Resonance; only: boolean }): JSX.Element {
  const { index, resonance } = props;
  const path = `model.resonances[${index}]`;
  const who = resonance.name || `resonance ${index + 1}`;
  const width = typed(resonance.width);
  const sameUnit = unitOf(resonance.width) === unitOf(resonance.mass);
  const reach = width !== null && sameUnit ? Math.max(width.value * 5, 1e-9) : null;
  return (
    <fieldset>
      <legend>{who}</legend>
      <div class="fields">
        <Field path={`${path}.name`} label="Name" />
        <Choice label="Form" value={resonance.form} options={FORMS} onChange={(form) => chooseForm(path, resonance, form)} />
        <div class="with-slider">
          <Field path={`${path}.mass`} label={<span>Mass <span class="sym">M</span></span>} name={`mass of ${who}`} />
          <Slider
            path={`${path}.mass`}
            name={`Mass of ${who}`}
            reach={(value) => {
              const half = reach ?? value * 0.001;
              const step = 10 ** Math.floor(Math.log10(half / 200));
              return within(half, step)(value);
            }}
          />
        </div>
        {!widthFollows(resonance.form) && (
          <div class="with-slider">
            <Field path={`${path}.width`} label={<span>Width <span class="sym">Γ</span></span>} name={`width of ${who}`} />
            <Slider path={`${path}.width`} name={`Width of ${who}`} reach={around(5)} />
          </div>
        )}
        {resonance.form === "dressed" && (
          <div class="field">
            <Switch label="Pseudoscalar (γ₅)" on={resonance.pseudoscalar === true} onChange={(on) => setField(`${path}.pseudoscalar`, on || undefined, `parity of ${who}`)} />
          </div>
        )}
        {kindOf(sheet.value) === "waves" && <WaveOf index={index} />}
        <StrengthFields path={`${path}.strength`} strength={resonance.strength} who={who} />
        {index > 0 && (
          <div class="with-slider">
            <Field optional path={`${path}.phase`} label={<span>Phase <span class="sym">φ</span></span>} name={`phase of ${who}`} example="0 deg" />
            <Slider path={`${path}.phase`} name={`Phase of ${who}`} reach={within(180, 0.5)} />
          </div>
        )}
      </div>
      <FormFields path={path} of={resonance} />
      <details>
        <summary>Vertices{resonance.entrance || resonance.exit ? ", chosen" : ""}</summary>
        <div class="fields">
          <VertexFields path={`${path}.entrance`} label="Entrance" vertex={resonance.entrance ?? null} />
          <VertexFields path={`${path}.exit`} label="Exit" vertex={resonance.exit ?? null} />
        </div>
      </details>
      {!props.only && (
        <p>
          <button type="button" class="link" onClick={() => remove(index)}>
            Remove {who}
          </button>
        </p>
      )}
    </fieldset>
  );
}

function StrengthFields({ path, strength, who }: { path: string; strength: Strength; who: string }): JSX.Element {
  const make: Record<Strength["kind"], () => Strength> = {
    gamma_in_bf: () => ({ kind: "gamma_in_bf", value: "1 eV" }),
    bin_bf: () => ({ kind: "bin_bf", value: "1e-6" }),
    branchings: () => ({ kind: "branchings", b_in: "1e-4", b_f: "10 %" }),
    partial_widths: () => ({ kind: "partial_widths", gamma_in: "1 keV", gamma_f: "0.1 MeV" }),
    one_width: () => ({ kind: "one_width", value: "1 keV" }),
    from_form: () => ({ kind: "from_form" }),
  };
  const texts: [string, string][] =
    strength.kind === "branchings"
      ? [["b_in", "B_in"], ["b_f", "B_f"]]
      : strength.kind === "partial_widths"
        ? [["gamma_in", "Γ_in"], ["gamma_f", "Γ_f"]]
        : strength.kind === "from_form"
          ? []
          : [["value", strength.kind === "one_width" ? "Γ" : strength.kind === "bin_bf" ? "B_in·B_f" : "Γ_in·B_f"]];
  return (
    <>
      <Choice label="Strength given as" value={strength.kind} options={STRENGTHS} onChange={(kind) => setField(path, make[kind](), `strength of ${who}`)} />
      {texts.map(([key, label]) => (
        <div class="with-slider" key={key}>
          <Field path={`${path}.${key}`} label={<Sym text={label} />} name={`strength of ${who}`} />
          <Slider path={`${path}.${key}`} name={`${label.replace(/_/g, "")} of ${who}`} reach={around(4)} />
        </div>
      ))}
    </>
  );
}

function VertexFields({ path, label, vertex }: { path: string; label: string; vertex: Vertex | null }): JSX.Element {
  const make: Record<VertexKind, () => Vertex | undefined> = {
    default: () => undefined,
    constant: () => ({ kind: "constant" }),
    one_photon: () => ({ kind: "one_photon" }),
    massless: () => ({ kind: "massless" }),
    own: () => ({ kind: "own", channel: 1 }),
    running: () => ({ kind: "running", m1: "139.570 MeV", m2: "139.570 MeV", l: 1 }),
  };
  return (
    <>
      <Choice<VertexKind> wide label={label} value={vertex?.kind ?? "default"} options={VERTICES} onChange={(kind) => setField(path, make[kind](), `${label.toLowerCase()} vertex`)} />
      {vertex?.kind === "running" && <TwoBodies path={path} l={vertex.l} />}
      {vertex?.kind === "own" && <Choice label="Channel or loop" value={String(vertex.channel)} options={["1", "2", "3", "4"].map((n) => [n, n] as const)} onChange={(n) => setField(`${path}.channel`, Number(n), "channel of a vertex")} />}
    </>
  );
}

function remove(index: number): void {
  change("remove a resonance", (before) => ({
    ...before,
    model: { ...before.model, resonances: before.model.resonances.filter((_, i) => i !== index) },
  }));
}
