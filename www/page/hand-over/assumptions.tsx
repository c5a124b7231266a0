/** What the numbers rest on, in the words of the sheet. */
import type { JSX } from "preact";
import { sheet } from "../state/sheet";
import type { Sheet } from "../state/types";

/** The list. */
export function Assumptions(): JSX.Element {
  return (
    <section>
      <h2>Assumptions</h2>
      <dl class="facts">
        {assumptionsOf(sheet.value).map(([name, text]) => (
          <div key={name}>
            <dt>{name}</dt>
            <dd>{text}</dd>
          </div>
        ))}
      </dl>
    </section>
  );
}

const ARRANGEMENTS = { equal_beams: "two beams dialled alike", unequal_beams: "beam 1 dialled, beam 2 fixed", fixed_target: "beam on a target at rest" };
const STAGES = { observed: "as observed", radiation_removed: "radiation removed", born: "radiation and spread removed" };
const FORMS = {
  constant_width: "constant width",
  massless_channels: "massless channels",
  running_width: "running width",
  flatte: "Flatté",
  gounaris_sakurai: "Gounaris–Sakurai",
  dressed: "dressed by loops",
  free: "free",
};

/** Name and text of each assumption. */
export function assumptionsOf(now: Sheet): [string, string][] {
  const { beam, model, detection, data } = now;
  const found: [string, string][] = [
    ["Beams", `${beam.first.name} on ${beam.second.name}, ${ARRANGEMENTS[beam.arrangement]}`],
    ["Spread", spreadOf(beam.spread)],
    ["Luminosity", beam.luminosity || "not given"],
  ];
  const kind = model.hypothesis ?? "partial_wave";
  if (kind !== "partial_wave") found.push(["Hypothesis", kind.replace("_", "-")]);
  if (kind === "diagrams" && model.diagrams) {
    found.push(["Reaction", model.diagrams.reaction.replace(/_/g, " ")]);
    for (const { name, pseudoscalar, mass, width, form, g, g_other } of model.diagrams.mediators) {
      found.push([name, `${pseudoscalar ? "pseudoscalar" : "scalar"}, ${mass}, ${width ? `${width}, ` : ""}${FORMS[form]}, g ${g}${g_other ? `, g_F ${g_other}` : ""}`]);
    }
  }
  if (kind === "k_matrix") model.k_matrix?.poles.forEach((pole, i) => found.push([`Bare pole ${i + 1}`, `${pole.mass}, couplings ${pole.g1} and ${pole.g2}`]));
  if (kind === "waves") model.waves?.forEach((wave, i) => found.push([`Wave ${i + 1}`, `J = ${wave.j}${wave.pc ? `, PC = ${wave.pc}` : ""}${wave.phase ? `, phase ${wave.phase}` : ""}`]));
  if (model.cos_cut) found.push(["Cut", `|cos θ| below ${model.cos_cut}`]);
  (kind === "partial_wave" || kind === "waves" ? model.resonances : []).forEach((resonance, i) => {
    const strength = Object.entries(resonance.strength)
      .filter(([key]) => key !== "kind")
      .map(([, text]) => text)
      .join(", ");
    const phase = i === 0 ? "" : `, phase ${resonance.phase || "0"}`;
    found.push([resonance.name, `${resonance.mass}, ${resonance.width ? `${resonance.width}, ` : ""}${FORMS[resonance.form]}${strength ? `, strength ${strength}` : ""}${phase}`]);
  });
  if (model.coherent) found.push(["Coherent background", listed(model.coherent)]);
  if (model.incoherent) found.push(["Incoherent background", listed(model.incoherent)]);
  found.push(["Radiation", model.radiation.on ? `on, at least ${model.radiation.w_min || "?"} left` : "off"]);
  found.push(["Efficiency", detection.efficiency || "1 where a row brings none"]);
  if (detection.background_cross_section) found.push(["Background", detection.background_cross_section]);
  if (detection.background_rate) found.push(["Background rate", detection.background_rate]);
  found.push(["Data", STAGES[data.stage]]);
  const common = [
    ["energy, all points", data.common_energy_error],
    ["energy, within a fill", data.group_energy_error],
    ["scale, all points", data.common_scale_error],
  ].filter(([, text]) => text);
  found.push(["Common errors", common.length === 0 ? "none" : common.map(([name, text]) => `${name} ${text}`).join("; ")]);
  return found;
}

function spreadOf(spread: Sheet["beam"]["spread"]): string {
  if (spread.kind === "none") return "none";
  if (spread.kind === "table") return "tabulated";
  const what = { w: "of W", relative: "relative, each beam", each: "each beam" }[spread.kind];
  return `${spread.first || "?"} ${what}${spread.known_to ? `, known to ${spread.known_to}` : ""}`;
}

function listed(background: object): string {
  return Object.entries(background)
    .map(([key, value]) => (key === "kind" ? String(value).replace(/_/g, " ") : `${key} ${Array.isArray(value) ? value.join(", ") : String(value)}`))
    .join(", ");
}
