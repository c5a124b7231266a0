/** Several partial waves: spin, selection rules, phase, helicity or LS couplings of entrance and exit. */
import type { JSX } from "preact";
import { Choice, Field } from "../parts/field";
import { Icon } from "../parts/icon";
import { around, Slider, within } from "../parts/slider";
import { change, setField, sheet } from "../state/sheet";
import { problemAt } from "../state/answers";
import type { Couplings, HelicityTerm, LsTerm, Wave } from "../state/types";
import { newWave } from "./kinds";

const PC = [
  ["", "Not asked"],
  ["++", "++"],
  ["+-", "+ −"],
  ["-+", "− +"],
  ["--", "− −"],
] as const;

/** The cards of all waves. */
export function WaveFields({ waves }: { waves: readonly Wave[] }): JSX.Element {
  return (
    <>
      {waves.map((wave, i) => (
        <WaveCard key={i} index={i} wave={wave} only={waves.length === 1} />
      ))}
      <p>
        <button type="button" class="button" onClick={() => add(waves)}>
          <Icon name="plus" /> Add a wave
        </button>
      </p>
    </>
  );
}

/** A new wave brings a resonance: a wave without one says nothing. */
function add(waves: readonly Wave[]): void {
  change("add a wave", (before) => {
    const last = before.model.resonances.at(-1);
    const { phase: _, ...alike } = last ?? { name: "R", mass: "1 GeV", width: "1 MeV", strength: { kind: "gamma_in_bf" as const, value: "1 eV" }, form: "constant_width" as const };
    const resonances = [...before.model.resonances, { ...alike, name: `${alike.name}'`, wave: waves.length + 1 }];
    return { ...before, model: { ...before.model, waves: [...waves, { ...newWave("2"), phase: "0 deg" }], resonances } };
  });
}

function remove(index: number): void {
  change("remove a wave", (before) => {
    const resonances = before.model.resonances
      .filter((r) => (r.wave ?? 1) !== index + 1)
      .map((r) => ((r.wave ?? 1) > index + 1 ? { ...r, wave: (r.wave ?? 1) - 1 } : r));
    return { ...before, model: { ...before.model, waves: (before.model.waves ?? []).filter((_, i) => i !== index), resonances } };
  });
}

function WaveCard({ index, wave, only }: { index: number; wave: Wave; only: boolean }): JSX.Element {
  const path = `model.waves[${index}]`;
  const refused = problemAt(`${path}.pc`);
  return (
    <fieldset>
      <legend>
        Wave {index + 1}, <span class="sym">J</span> = {wave.j}
      </legend>
      <div class="fields">
        <Field path={`${path}.j`} label={<span class="sym">J</span>} name="spin of a wave" />
        <Choice label="P and C of a fermion pair" value={(wave.pc ?? "") as (typeof PC)[number][0]} options={PC} onChange={(pc) => setField(`${path}.pc`, pc || undefined, "P and C")} />
        {refused && <p class="problem field-wide" role="status">{refused.message}</p>}
        {index > 0 && (
          <div class="with-slider">
            <Field optional path={`${path}.phase`} label="Phase against wave 1" example="0 deg" />
            <Slider path={`${path}.phase`} name={`Phase of wave ${index + 1}`} reach={within(180, 0.5)} />
          </div>
        )}
      </div>
      <CouplingFields path={`${path}.entrance`} label="Beams" of={wave.entrance} />
      <CouplingFields path={`${path}.exit`} label="Final state" of={wave.exit} />
      {!only && (
        <button type="button" class="link" onClick={() => remove(index)}>
          Remove wave {index + 1} and its resonances
        </button>
      )}
    </fieldset>
  );
}

function CouplingFields({ path, label, of }: { path: string; label: string; of: Couplings }): JSX.Element {
  const rows = of.kind === "helicity" ? `${path}.amplitudes` : `${path}.terms`;
  const list: readonly (HelicityTerm | LsTerm)[] = of.kind === "helicity" ? of.amplitudes : of.terms;
  const next = of.kind === "helicity" ? { l1: "0", l2: "0", magnitude: "1" } : { l: 0, s: "0", magnitude: "1" };
  const problem = problemAt(path);
  return (
    <div class="channels">
      <h3>{label}</h3>
      <div class="fields">
        <Choice
          wide
          label={`${label}: couplings given by`}
          value={of.kind}
          options={[["helicity", "Helicity amplitudes"], ["ls", "L and S"]]}
          onChange={(kind) => setField(path, kind === "helicity" ? { kind, amplitudes: [{ l1: "1/2", l2: "-1/2", magnitude: "1" }] } : { kind, s1: "1/2", s2: "1/2", terms: [{ l: 0, s: "1", magnitude: "1" }] }, "kind of couplings")}
        />
        {problem && <p class="problem field-wide" role="status">{problem.message}</p>}
        {of.kind === "ls" && (
          <>
            <Field path={`${path}.s1`} label="Spin 1" />
            <Field path={`${path}.s2`} label="Spin 2" />
          </>
        )}
      </div>
      {list.map((term, i) => {
        const wrong = problemAt(`${rows}[${i}]`);
        return (
          <div class="fields channel" key={i}>
            {"l1" in term ? (
              <>
                <Field path={`${rows}[${i}].l1`} label="λ₁" />
                <Field path={`${rows}[${i}].l2`} label="λ₂" />
              </>
            ) : (
              <>
                <Choice label="L" value={String(term.l)} options={["0", "1", "2", "3", "4", "5", "6"].map((n) => [n, n] as const)} onChange={(n) => setField(`${rows}[${i}].l`, Number(n), "L")} />
                <Field path={`${rows}[${i}].s`} label="S" />
              </>
            )}
            <div class="with-slider">
              <Field path={`${rows}[${i}].magnitude`} label="Size" name="size of a coupling" />
              <Slider path={`${rows}[${i}].magnitude`} name={`Size of coupling ${i + 1}`} reach={around(5)} />
            </div>
            <Field optional path={`${rows}[${i}].phase`} label="Phase" example="0 deg" />
            {wrong && <p class="problem field-wide" role="status">{wrong.message} Allowed: {wrong.allowed}.</p>}
            {list.length > 1 && (
              <div class="field field-buttons">
                <button type="button" class="link" onClick={() => setField(rows, list.filter((_, j) => j !== i), "remove a coupling")}>
                  Remove
                </button>
              </div>
            )}
          </div>
        );
      })}
      <button type="button" class="button" onClick={() => setField(rows, [...list, next], "add a coupling")}>
        Add a coupling
      </button>
    </div>
  );
}

/** Which wave a resonance belongs to; the list keeps the order of the waves. */
export function WaveOf({ index }: { index: number }): JSX.Element | null {
  const { waves, resonances } = sheet.value.model;
  const count = (waves ?? []).length;
  if (count < 2) return null;
  const options = Array.from({ length: count }, (_, i) => [String(i + 1), `Wave ${i + 1}`] as const);
  return (
    <Choice
      label="Belongs to"
      value={String(resonances[index]?.wave ?? 1)}
      options={options}
      onChange={(value) =>
        change("wave of a resonance", (before) => {
          const moved = before.model.resonances.map((r, i) => (i === index ? { ...r, wave: Number(value) } : r));
          moved.sort((a, b) => (a.wave ?? 1) - (b.wave ?? 1));
          return { ...before, model: { ...before.model, resonances: moved } };
        })
      }
    />
  );
}
