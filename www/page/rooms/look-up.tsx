/** Look-ups: a setting in every kind, read down a phone; the particle table with search. */
import type { JSX } from "preact";
import { useSignal, useSignalEffect } from "@preact/signals";
import { digits } from "../format/number";
import { Refused } from "../bridge/failures";
import { Choice } from "../parts/field";
import { Icon } from "../parts/icon";
import { Quantity } from "../parts/quantity";
import { copy } from "../state/files";
import { sheet } from "../state/sheet";
import { particles } from "../state/tables";
import type { Dial, Named } from "../state/types";
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
  return (
    <>
      <Convert />
      <Particles />
    </>
  );
}

function Convert(): JSX.Element {
  const kind = useSignal<Dial>("w");
  const text = useSignal(sheet.peek().model.resonances[0]?.mass ?? "");
  const answer = useSignal<Converted | null>(null);
  const refused = useSignal("");
  const copied = useSignal("");
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
        {answer.value?.settings.map(([dial, value]) => (
          <li key={dial} class={dial === sheet.value.beam.dial ? "strong" : ""}>
            <span class="note">{KINDS.find(([key]) => key === dial)?.[1]}{dial === sheet.value.beam.dial ? ", on the dial" : ""}</span>
            <span class="figure">
              <Quantity text={value} />
            </span>
            <button type="button" class="tool" aria-label={`Copy ${value}`} onClick={() => void copy(value).then((done) => (copied.value = done ? `${value} copied` : ""))}>
              <Icon name="copy" />
            </button>
          </li>
        ))}
        {answer.value?.values.map((entry) => (
          <li key={entry.name}>
            <span class="note">{entry.name}</span>
            <span>{entry.text}</span>
          </li>
        ))}
      </ul>
      <p class="note" role="status">
        {copied.value}
      </p>
    </fieldset>
  );
}

function Particles(): JSX.Element {
  const search = useSignal("");
  const found = particles.value.filter((particle) => particle.name.toLowerCase().includes(search.value.trim().toLowerCase()));
  return (
    <fieldset>
      <legend>Particles</legend>
      <div class="field field-wide">
        <label for="look-up-particle">Search</label>
        <input id="look-up-particle" type="search" autocomplete="off" value={search.value} onInput={(event) => (search.value = event.currentTarget.value)} />
      </div>
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
            </tr>
          </thead>
          <tbody>
            {found.map((particle) => (
              <tr key={particle.name}>
                <th scope="row">{particle.name}</th>
                <td class="number">{String(Number((particle.mass_gev * 1e3).toPrecision(12)))}</td>
                <td>{particle.spin}</td>
                <td class="number">{particle.width_gev ? digits(particle.width_gev * 1e3, 4) : ""}</td>
              </tr>
            ))}
          </tbody>
        </table>
      </div>
      {found.length === 0 && <p class="empty">No particle of that name. In Beam any other can be typed in with its mass and spin.</p>}
    </fieldset>
  );
}
