/** Tree-level diagrams: reaction, mediators with their couplings and propagators, cut on the angle. */
import type { JSX } from "preact";
import { Choice, Field, Switch } from "../parts/field";
import { Icon } from "../parts/icon";
import { around, Slider } from "../parts/slider";
import { setField } from "../state/sheet";
import type { Diagrams, Mediator, Reaction } from "../state/types";
import { FORMS, FormFields, mediatorForm, widthFollows } from "./forms";
import { newMediator } from "./kinds";
import { Doors } from "./doors";

const REACTIONS = [
  ["pair_to_other_pair", "f f̄ → F F̄   (s)"],
  ["other_elastic", "f F → f F   (t)"],
  ["pair_elastic", "f f̄ → f f̄   (s, t)"],
  ["same_elastic", "f f → f f   (t, u)"],
  ["compton", "f φ → f φ   (s, u)"],
  ["pair_to_scalars", "f f̄ → φ φ   (t, u)"],
] as const satisfies readonly (readonly [Reaction, string])[];

/** A second fermion takes part. */
export function hasOther(reaction: Reaction): boolean {
  return reaction === "pair_to_other_pair" || reaction === "other_elastic";
}

/** φ is an external particle, the fermion is exchanged. */
export function scalarOutside(reaction: Reaction): boolean {
  return reaction === "compton" || reaction === "pair_to_scalars";
}

/** The fields. */
export function DiagramFields({ model }: { model: Diagrams }): JSX.Element {
  const path = "model.diagrams";
  const one = scalarOutside(model.reaction);
  return (
    <>
      <fieldset>
        <legend>Reaction</legend>
        <div class="fields">
          <Choice wide label="f is beam 1" value={model.reaction} options={REACTIONS} onChange={(reaction) => setField(`${path}.reaction`, reaction, "reaction")} />
          {hasOther(model.reaction) && <Field path={`${path}.other_mass`} label="Mass of F" example="105.6583755 MeV" />}
          <CosCut />
        </div>
      </fieldset>
      {model.mediators.map((mediator, i) => (
        <MediatorCard key={i} index={i} of={mediator} model={model} />
      ))}
      {!one && model.mediators.length < 4 && (
        <p>
          <button type="button" class="button" onClick={() => setField(`${path}.mediators`, [...model.mediators, newMediator(model.mediators.at(-1)?.mass ?? "1 GeV", "1 MeV", `φ${model.mediators.length + 1}`)], "add a mediator")}>
            <Icon name="plus" /> Add a mediator
          </button>
        </p>
      )}
    </>
  );
}

/** The cut that diagrams and waves have in common. */
export function CosCut(): JSX.Element {
  return <Field optional path="model.cos_cut" label="Only |cos θ| below" name="cut on |cos θ|" example="1 (all angles)" />;
}

function MediatorCard({ index, of, model }: { index: number; of: Mediator; model: Diagrams }): JSX.Element {
  const path = `model.diagrams.mediators[${index}]`;
  const who = of.name || `mediator ${index + 1}`;
  const outside = scalarOutside(model.reaction);
  const couplings: readonly (readonly ["g" | "g_other", string])[] = hasOther(model.reaction) ? [["g", "g"], ["g_other", "g_F"]] : [["g", "g"]];
  return (
    <fieldset>
      <legend>{who}</legend>
      <div class="fields">
        <Field path={`${path}.name`} label="Name" />
        <div class="field">
          <Switch label="Pseudoscalar (γ₅)" on={of.pseudoscalar === true} onChange={(on) => setField(`${path}.pseudoscalar`, on || undefined, `parity of ${who}`)} />
        </div>
        <div class="with-slider">
          <Field path={`${path}.mass`} label={<span>Mass <span class="sym">M</span></span>} name={`mass of ${who}`} />
          <Slider path={`${path}.mass`} name={`Mass of ${who}`} reach={around(1.2)} />
        </div>
        {!outside && <Choice label="Propagator" value={of.form} options={FORMS} onChange={(form) => mediatorForm(path, of, form)} />}
        {couplings.map(([key, label]) => (
          <div class="with-slider" key={key}>
            <Field path={`${path}.${key}`} label={label === "g" ? <span class="sym">g</span> : <span><span class="sym">g</span><sub>F</sub></span>} name={`coupling ${label} of ${who}`} />
            <Slider path={`${path}.${key}`} name={`Coupling ${label} of ${who}`} reach={around(5)} />
          </div>
        ))}
        {!outside && !widthFollows(of.form) && (
          <div class="with-slider">
            <Field path={`${path}.width`} label={<span>Width <span class="sym">Γ</span></span>} name={`width of ${who}`} />
            <Slider path={`${path}.width`} name={`Width of ${who}`} reach={around(5)} />
          </div>
        )}
      </div>
      {!outside && <FormFields path={path} of={of} further />}
      <Doors mass={of.mass} pseudoscalar={of.pseudoscalar === true} into={[["f f̄", "", `${path}.g`], ...(hasOther(model.reaction) ? [["F F̄", model.other_mass ?? "", `${path}.g_other`] as const] : [])]} />
      {model.mediators.length > 1 && (
        <button type="button" class="link" onClick={() => setField("model.diagrams.mediators", model.mediators.filter((_, j) => j !== index), "remove a mediator")}>
          Remove {who}
        </button>
      )}
    </fieldset>
  );
}
