/** The two-channel K-matrix: bare poles, channels, the constant part. */
import type { JSX } from "preact";
import { Choice, Field, Switch } from "../parts/field";
import { Icon } from "../parts/icon";
import { around, Slider } from "../parts/slider";
import { setField } from "../state/sheet";
import type { KMatrix } from "../state/types";

/** Its fields. */
export function KMatrixFields({ model }: { model: KMatrix }): JSX.Element {
  const path = "model.k_matrix";
  const channels = model.channels ?? [];
  const sides = channels.map((channel, i) => [String(i + 1), channel.name || `channel ${i + 1}`] as const);
  return (
    <>
      {model.poles.map((_pole, i) => {
        const here = `${path}.poles[${i}]`;
        return (
          <fieldset key={i}>
            <legend>Bare pole {i + 1}</legend>
            <div class="fields">
              {(["mass", "g1", "g2"] as const).map((key) => (
                <div class="with-slider" key={key}>
                  <Field path={`${here}.${key}`} label={key === "mass" ? "Mass" : `Coupling to ${channels[key === "g1" ? 0 : 1]?.name ?? key}`} name={`${key} of bare pole ${i + 1}`} />
                  <Slider path={`${here}.${key}`} name={`${key} of bare pole ${i + 1}`} reach={around(key === "mass" ? 1.1 : 4)} />
                </div>
              ))}
            </div>
            {model.poles.length > 1 && (
              <button type="button" class="link" onClick={() => setField(`${path}.poles`, model.poles.filter((_, j) => j !== i), "remove a bare pole")}>
                Remove bare pole {i + 1}
              </button>
            )}
          </fieldset>
        );
      })}
      <p>
        <button type="button" class="button" onClick={() => setField(`${path}.poles`, [...model.poles, { mass: "", g1: "50 MeV", g2: "50 MeV" }], "add a bare pole")}>
          <Icon name="plus" /> Add a bare pole
        </button>
      </p>
      <fieldset>
        <legend>Channels</legend>
        <div class="fields">
          {channels.map((_, i) => (
            <>
              <Field path={`${path}.channels[${i}].name`} label={`Channel ${i + 1}`} />
              <Field path={`${path}.channels[${i}].m1`} label="Mass 1" />
              <Field path={`${path}.channels[${i}].m2`} label="Mass 2" />
            </>
          ))}
          <Choice label="The beams are" value={String(model.entrance)} options={sides} onChange={(n) => setField(`${path}.entrance`, Number(n), "entrance channel")} />
          <Choice label="What is seen is" value={String(model.exit)} options={sides} onChange={(n) => setField(`${path}.exit`, Number(n), "exit channel")} />
          <Field path="model.j" label={<span>Spin <span class="sym">J</span></span>} name="spin of the wave" example="0" />
          {(["c11", "c12", "c22"] as const).map((key) => (
            <Field optional key={key} path={`${path}.${key}`} label={<span class="sym">{key}</span>} name={key} example="0" />
          ))}
          <div class="field field-wide">
            <Switch label="Chew–Mandelstam functions (else iρ)" on={model.chew_mandelstam} onChange={(on) => setField(`${path}.chew_mandelstam`, on, "Chew–Mandelstam functions")} />
          </div>
        </div>
      </fieldset>
    </>
  );
}
