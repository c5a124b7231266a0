/** Model: resonances, backgrounds inside and outside the modulus, final state, radiation. */
import type { JSX } from "preact";
import { Icon } from "../parts/icon";
import { Choice, Field, Switch } from "../parts/field";
import { around, Slider, within } from "../parts/slider";
import { DiagramFields, CosCut } from "../model/diagrams";
import { choose, KINDS, kindOf } from "../model/kinds";
import { KMatrixFields } from "../model/k-matrix";
import { WaveFields } from "../model/waves";
import { stage } from "../amplitude/stage";
import { change, setField, sheet } from "../state/sheet";
import type { Coherent, Incoherent, Resonance } from "../state/types";
import { ResonanceCard } from "./resonance";

type CoherentKind = "none" | Coherent["kind"];
type IncoherentKind = "none" | Incoherent["kind"];

/** The room. */
export function ModelRoom(): JSX.Element {
  const { resonances, radiation, k_matrix, diagrams, waves } = sheet.value.model;
  const kind = kindOf(sheet.value);
  const summed = kind === "partial_wave" || kind === "waves";
  return (
    <>
      <div class="fields">
        <Choice wide label="Hypothesis" value={kind} options={KINDS} onChange={choose} />
      </div>
      {stage.value === "scan" && (
        <p>
          <button type="button" class="button" onClick={() => (stage.value = "amplitude")}>
            Show the amplitude and its poles
          </button>
        </p>
      )}
      {kind === "k_matrix" && k_matrix && <KMatrixFields model={k_matrix} />}
      {kind === "diagrams" && diagrams && <DiagramFields model={diagrams} />}
      {kind === "waves" && (
        <>
          <WaveFields waves={waves ?? []} />
          <div class="fields">
            <CosCut />
          </div>
        </>
      )}
      {summed && (
        <>
          {resonances.map((resonance, i) => (
            <ResonanceCard key={i} index={i} resonance={resonance} only={resonances.length === 1} />
          ))}
          <p>
            <button type="button" class="button" onClick={addResonance}>
              <Icon name="plus" /> Add a resonance
            </button>
          </p>
          <CoherentFields />
        </>
      )}
      <IncoherentFields />
      <fieldset>
        <legend>Final state and radiation</legend>
        <div class="fields">
          <Field path="model.final_state" label="Final state" example="hadrons" />
          <Field optional path="model.final_threshold" label="Its threshold" example="279.2 MeV" />
          {kind === "partial_wave" && <Field path="model.j" label={<span>Spin <span class="sym">J</span> of the wave</span>} name="spin of the wave" example="1" />}
          <Field optional path="model.accuracy" label="Relative accuracy" example="1e-6" />
          <div class="field field-wide">
            <Switch label="Initial-state radiation" on={radiation.on} onChange={(on) => setField("model.radiation.on", on, "radiation")} />
          </div>
          {radiation.on && (
            <Field optional wide path="model.radiation.w_min" label={<span>Least <span class="sym">W</span> left after radiation</span>} name="least W" example="2.65 GeV" hint="At least the sum of the final state's masses" />
          )}
        </div>
      </fieldset>
    </>
  );
}

function CoherentFields(): JSX.Element {
  const coherent = sheet.value.model.coherent ?? null;
  const mass = sheet.value.model.resonances[0]?.mass ?? "1 GeV";
  const make: Record<CoherentKind, () => Coherent | undefined> = {
    none: () => undefined,
    one_photon: () => ({ kind: "one_photon", c: "1 nb", w0: mass, phase: "180 deg" }),
    shared_vertices: () => ({ kind: "shared_vertices", c: "0" }),
    polynomial: () => ({ kind: "polynomial", w0: mass, coefficients: ["0"], phase: "0 deg" }),
  };
  return (
    <fieldset>
      <legend>Background inside the modulus</legend>
      <div class="fields">
        <Choice<CoherentKind>
          wide
          label="Coherent background"
          value={coherent?.kind ?? "none"}
          options={[
            ["none", "None"],
            ["one_photon", "One-photon continuum"],
            ["shared_vertices", "C/M² sharing the first resonance's vertices"],
            ["polynomial", "Polynomial in W − W₀ with a phase"],
          ]}
          onChange={(kind) => setField("model.coherent", make[kind](), "coherent background")}
        />
        {coherent?.kind === "one_photon" && (
          <>
            <Field path="model.coherent.c" label={<span class="sym">c</span>} name="continuum" />
            <Field path="model.coherent.w0" label="at W₀" />
            <Field optional path="model.continuum_factor" label="Factor on c" example="1" />
          </>
        )}
        {coherent?.kind === "shared_vertices" && <Field path="model.coherent.c" label={<span class="sym">C</span>} name="coherent background" />}
        {coherent?.kind === "polynomial" && (
          <>
            <Field path="model.coherent.w0" label="W₀" />
            <Coefficients path="model.coherent.coefficients" list={coherent.coefficients} />
          </>
        )}
        {coherent !== null && coherent.kind !== "shared_vertices" && (
          <div class="with-slider">
            <Field path="model.coherent.phase" label="Phase" name="phase of the background" />
            <Slider path="model.coherent.phase" name="Phase of the background" reach={within(180, 0.5)} />
          </div>
        )}
      </div>
    </fieldset>
  );
}

function IncoherentFields(): JSX.Element {
  const incoherent = sheet.value.model.incoherent ?? null;
  const mass = sheet.value.model.resonances[0]?.mass ?? "1 GeV";
  const make: Record<IncoherentKind, () => Incoherent | undefined> = {
    none: () => undefined,
    power: () => ({ kind: "power", c0: "0 nb", w0: mass, n: "2" }),
    polynomial: () => ({ kind: "polynomial", w0: mass, coefficients: ["0 nb"] }),
  };
  return (
    <fieldset>
      <legend>Background outside the modulus</legend>
      <div class="fields">
        <Choice<IncoherentKind>
          wide
          label="Incoherent background"
          value={incoherent?.kind ?? "none"}
          options={[
            ["none", "None"],
            ["power", "c₀ (W₀/W)ⁿ"],
            ["polynomial", "Polynomial in W − W₀"],
          ]}
          onChange={(kind) => setField("model.incoherent", make[kind](), "incoherent background")}
        />
        {incoherent !== null && <Field path="model.incoherent.w0" label="W₀" />}
        {incoherent?.kind === "power" && (
          <>
            <div class="with-slider">
              <Field path="model.incoherent.c0" label="c₀" name="incoherent background" />
              <Slider path="model.incoherent.c0" name="Incoherent background" reach={around(4)} />
            </div>
            <Field path="model.incoherent.n" label="n" />
          </>
        )}
        {incoherent?.kind === "polynomial" && <Coefficients path="model.incoherent.coefficients" list={incoherent.coefficients} />}
      </div>
    </fieldset>
  );
}

function Coefficients({ path, list }: { path: string; list: readonly string[] }): JSX.Element {
  return (
    <>
      {list.map((_, i) => (
        <Field key={i} path={`${path}[${i}]`} label={`Coefficient ${i}`} />
      ))}
      <div class="field field-buttons">
        <button type="button" class="button" onClick={() => setField(path, [...list, list.at(-1)?.replace(/^[^a-zA-Zµ%]*/, "0 ").trim() ?? "0"], "add a coefficient")}>
          <Icon name="plus" /> Power {list.length}
        </button>
        {list.length > 1 && (
          <button type="button" class="button" onClick={() => setField(path, list.slice(0, -1), "remove a coefficient")}>
            Remove power {list.length - 1}
          </button>
        )}
      </div>
    </>
  );
}

function addResonance(): void {
  change("add a resonance", (before) => {
    const last = before.model.resonances.at(-1);
    const next: Resonance =
      last === undefined
        ? { name: "R", mass: "1 GeV", width: "1 MeV", strength: { kind: "gamma_in_bf", value: "1 eV" }, form: "constant_width" }
        : { ...last, name: `${last.name}'`, phase: last.phase ?? "0 deg" };
    return { ...before, model: { ...before.model, resonances: [...before.model.resonances, next] } };
  });
}
