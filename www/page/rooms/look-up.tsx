/** Look-ups: a setting in every kind, read down a phone; small sums of a shift; the particle table with search. */
import type { JSX } from "preact";
import { useSignal, useSignalEffect } from "@preact/signals";
import { digits } from "../format/number";
import { Refused } from "../bridge/failures";
import { LookUp, Line } from "../look-up/form";
import { Choose } from "../look-up/into";
import { Choice } from "../parts/field";
import { setField, sheet } from "../state/sheet";
import { particles } from "../state/tables";
import type { Dial, KnownParticle, Named, Sheet } from "../state/types";
import { ask } from "../state/work";

const KINDS: readonly (readonly [Dial, string])[] = [
  ["w", "W"],
  ["total_energy", "Total energy"],
  ["kinetic_energy", "Kinetic energy"],
  ["momentum", "Momentum"],
];

interface Converted {
  settings: [Dial, string][];
  values: Named[];
}

/** The room. */
export function LookUpRoom(): JSX.Element {
  const now = sheet.peek();
  const state = now.model.resonances[0];
  return (
    <>
      <Convert />
      <fieldset>
        <legend>Small sums</legend>
        <LookUp
          title="Threshold and break-up momentum"
          asks={[
            { key: "first", label: "First", example: "p", particle: true },
            { key: "second", label: "Second", example: "938.272 MeV", particle: true },
            { key: "w", label: "at W", example: "3.1 GeV" },
          ]}
          first={{ first: now.beam.first.name, second: now.beam.second.name, w: state?.mass ?? "" }}
          what={({ first = "", second = "", w = "" }) => (first === "" || second === "" ? null : { of: "pair", first, second, w })}
        />
        <Couplings mass={state?.mass ?? ""} />
        <LookUp
          title="Peak cross section"
          asks={[
            { key: "mass", label: "Mass", example: "2874.2 MeV" },
            { key: "spin", label: "Spin of the wave", example: "1" },
            { key: "product", label: "Bin · Bf", example: "4e-5" },
          ]}
          first={{ mass: state?.mass ?? "", spin: "1", product: productOf(now) }}
          what={({ mass = "", spin = "", product = "" }) => (mass === "" || spin === "" || product === "" ? null : { of: "peak", mass, spin, product })}
        />
        <LookUp
          title="Rate, and time to so many events"
          asks={[
            { key: "cross_section", label: "Observed cross section", example: "14.76 nb" },
            { key: "luminosity", label: "Luminosity", example: "9.0e30 cm^-2 s^-1" },
            { key: "efficiency", label: "Efficiency", example: "1" },
            { key: "background", label: "Background", example: "1.5 /h" },
            { key: "events", label: "Events wanted", example: "1000" },
          ]}
          first={{
            cross_section: "",
            luminosity: now.beam.luminosity ?? "",
            efficiency: now.detection.efficiency ?? "",
            background: now.detection.background_rate ?? "",
            events: "1000",
          }}
          what={({ cross_section = "", luminosity = "", efficiency = "", background = "", events = "" }) =>
            cross_section === "" || luminosity === "" || events === "" ? null : { of: "rate", cross_section, luminosity, efficiency, background, events }
          }
        />
      </fieldset>
      <Particles />
    </>
  );
}

function productOf(now: Sheet): string {
  const strength = now.model.resonances[0]?.strength;
  return strength?.kind === "bin_bf" ? strength.value : "";
}

const GIVEN = [
  ["coupling", "Coupling g"],
  ["width", "Width"],
  ["lifetime", "Lifetime"],
] as const;
const EXAMPLES = { coupling: "4.0e-4", width: "0.301 keV", lifetime: "1e-20 s" };

/** The three faces of a Yukawa coupling. */
function Couplings({ mass }: { mass: string }): JSX.Element {
  const given = useSignal<"coupling" | "width" | "lifetime">("coupling");
  const parity = useSignal<"scalar" | "pseudoscalar">("scalar");
  const colours = useSignal<"1" | "3">("1");
  return (
    <LookUp
      title="Coupling, width, lifetime"
      asks={[
        { key: "mass", label: "Mass of the state", example: "47.3 GeV" },
        { key: "fermion", label: "Decays into a pair of", example: "mu-", particle: true },
        { key: "value", label: "Value", example: EXAMPLES[given.value] },
      ]}
      first={{ mass, fermion: "mu-", value: "" }}
      what={({ mass: m = "", fermion = "", value = "" }) =>
        m === "" || fermion === "" || value === ""
          ? null
          : { of: "coupling", pseudoscalar: parity.value === "pseudoscalar", mass: m, fermion, colours: Number(colours.value), given: given.value, value }
      }
    >
      {() => (
        <>
          <Choice label="Given" value={given.value} options={GIVEN} onChange={(value) => (given.value = value)} />
          <Choice
            label="The state is a"
            value={parity.value}
            options={[
              ["scalar", "scalar"],
              ["pseudoscalar", "pseudoscalar"],
            ]}
            onChange={(value) => (parity.value = value)}
          />
          <Choice
            label="Colours"
            value={colours.value}
            options={[
              ["1", "1, leptons"],
              ["3", "3, quarks"],
            ]}
            onChange={(value) => (colours.value = value)}
          />
        </>
      )}
    </LookUp>
  );
}

function Convert(): JSX.Element {
  const kind = useSignal<Dial>("w");
  const text = useSignal(sheet.peek().model.resonances[0]?.mass ?? "");
  const answer = useSignal<Converted | null>(null);
  const refused = useSignal("");
  const told = useSignal("");
  useSignalEffect(() => {
    const request = { kind: "convert", sheet: sheet.value, from: kind.value, value: text.value } as const;
    let wanted = true;
    ask(request).then(
      ({ body }) => {
        if (!wanted || body.kind !== "convert") return;
        answer.value = body;
        refused.value = "";
      },
      (reason: unknown) => {
        if (!wanted) return;
        answer.value = null;
        refused.value = reason instanceof Refused ? reason.message : "";
      },
    );
    return () => {
      wanted = false;
    };
  });
  const onDial = sheet.value.beam.dial;
  const name = (dial: Dial): string => KINDS.find(([key]) => key === dial)?.[1] ?? dial;
  // What is dialled comes first: it is what is read down the phone.
  const settings = [...(answer.value?.settings ?? [])].sort(([a], [b]) => Number(b === onDial) - Number(a === onDial));
  return (
    <fieldset>
      <legend>W and the number to dial</legend>
      <div class="fields">
        <Choice label="Given" value={kind.value} options={KINDS} onChange={(value) => (kind.value = value)} />
        <div class="field">
          <label for="look-up-value">Value with unit</label>
          <input id="look-up-value" type="text" autocomplete="off" value={text.value} aria-invalid={refused.value === "" ? undefined : "true"} aria-describedby="look-up-problem" onInput={(event) => (text.value = event.currentTarget.value)} />
        </div>
      </div>
      <p class="problem" id="look-up-problem" role="status">
        {refused.value}
      </p>
      <ul class="digits">
        {settings.map(([dial, value]) => (
          <Line
            key={dial}
            big
            dial={dial === onDial}
            entry={{ name: `${name(dial)}${dial === onDial ? ", on the dial" : ""}`, text: value, value: Number.NaN, error: null, unit: dial === "w" ? "GeV" : "setting" }}
            why="conversion"
            told={(words) => (told.value = words)}
          />
        ))}
        {answer.value?.values.map((entry) => (
          <Line key={entry.name} entry={entry} only={entry.name !== "true W"} why={entry.name === "sigma_W" ? undefined : "conversion"} told={(words) => (told.value = words)} />
        ))}
      </ul>
      <p class="note" role="status">
        {told.value}
      </p>
    </fieldset>
  );
}

/** Letters of a name as people type it: no signs of charge, no case. */
function plain(text: string): string {
  return text.toLowerCase().replace(/[^a-z0-9]/g, "");
}

function Particles(): JSX.Element {
  const search = useSignal("");
  const told = useSignal("");
  const wanted = search.value.trim().toLowerCase();
  const found = particles.value.filter(({ name }) => name.toLowerCase().includes(wanted) || (plain(wanted) !== "" && plain(name).includes(plain(wanted))));
  return (
    <fieldset>
      <legend>Particles</legend>
      <div class="field field-wide">
        <label for="look-up-particle">Search</label>
        <input id="look-up-particle" type="search" autocomplete="off" value={search.value} onInput={(event) => (search.value = event.currentTarget.value)} />
      </div>
      <p class="note" role="status">
        {told.value}
      </p>
      <div class="table-box table-box-short" tabIndex={0} role="region" aria-label="Particles found">
        <table class="plain">
          <thead>
            <tr>
              <th scope="col">Name</th>
              <th scope="col" class="number">
                Mass (MeV)
              </th>
              <th scope="col">Spin</th>
              <th scope="col" class="number">
                Width (MeV)
              </th>
              <th scope="col">
                <span class="unseen">Action</span>
              </th>
            </tr>
          </thead>
          <tbody>
            {found.map((particle) => (
              <Row key={particle.name} particle={particle} told={(words) => (told.value = words)} />
            ))}
          </tbody>
        </table>
      </div>
      {found.length === 0 && <p class="empty">No particle of that name. In Beam any other can be typed in with its mass and spin.</p>}
      <p class="note">Masses, widths and spins: Particle Data Group, Review of Particle Physics, 2026.</p>
    </fieldset>
  );
}

const BEAMS = [
  ["beam.first.name", "Beam 1"],
  ["beam.second.name", "Beam 2 or target"],
] as const;

function Row({ particle, told }: { particle: KnownParticle; told: (words: string) => void }): JSX.Element {
  return (
    <tr>
      <th scope="row">{particle.name}</th>
      <td class="number">{String(Number((particle.mass_gev * 1e3).toPrecision(12)))}</td>
      <td>{particle.spin}</td>
      <td class="number">{particle.width_gev ? digits(particle.width_gev * 1e3, 4) : ""}</td>
      <td>
        <Choose
          name={`Use ${particle.name} as`}
          words={BEAMS.map(([, words]) => words)}
          onChoose={(index) => {
            const [path = "", words = ""] = BEAMS[index] ?? [];
            setField(path, particle.name, words);
            told(`${words}: ${particle.name}. Undo takes it back.`);
          }}
        />
      </td>
    </tr>
  );
}
