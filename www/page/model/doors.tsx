/** Coupling and width are two doors to the same thing: one is typed, the other and the lifetime are told. */
import type { JSX } from "preact";
import { useEffect } from "preact/hooks";
import { useSignal } from "@preact/signals";
import { Choice } from "../parts/field";
import { Quantity } from "../parts/quantity";
import { textAt } from "../state/path";
import { setField, sheet } from "../state/sheet";
import type { Given, Named, Request } from "../state/types";
import { ask, withoutRows } from "../state/work";

interface DoorsProps {
  mass: string;
  pseudoscalar: boolean;
  /** (name, mass as typed or "" for beam 1, path of the coupling in the sheet). */
  into: readonly (readonly [string, string, string])[];
}

/** Beam 1 as a particle of the table, or its mass. */
function beam(): string {
  const { name, mass } = sheet.value.beam.first;
  return mass || name;
}

/** One line per decay: g, Γ and τ, any of which may be typed. */
export function Doors({ mass, pseudoscalar, into }: DoorsProps): JSX.Element {
  return (
    <details class="doors-of">
      <summary>Couplings as widths and lifetimes</summary>
      {into.map(([name, m, path]) => (
        <Door key={path} name={name} mass={mass} pseudoscalar={pseudoscalar} fermion={m || beam()} path={path} />
      ))}
    </details>
  );
}

const KNOWN = [
  ["width", "Partial width"],
  ["lifetime", "Lifetime"],
] as const satisfies readonly (readonly [Given, string])[];

function Door({ name, mass, pseudoscalar, fermion, path }: { name: string; mass: string; pseudoscalar: boolean; fermion: string; path: string }): JSX.Element {
  const told = useSignal<readonly Named[]>([]);
  const why = useSignal("");
  const known = useSignal<Given>("width");
  const typed = useSignal("");
  const g = textAt(sheet.value, path);
  const key = JSON.stringify([mass, pseudoscalar, fermion, g]);
  const request = (given: Given, value: string): Request => ({ kind: "look_up", sheet: withoutRows(sheet.peek()), what: { of: "coupling", pseudoscalar, mass, fermion, colours: 1, given, value } });
  useEffect(() => {
    let off = false;
    ask(request("coupling", g.replace(/\(.*?\)/, "").replace(/^-/, ""))).then(
      ({ body }) => {
        if (off || body.kind !== "looked_up") return;
        told.value = body.values;
        why.value = "";
      },
      (reason: unknown) => {
        if (off) return;
        told.value = [];
        why.value = messageOf(reason);
      },
    );
    return () => {
      off = true;
    };
  }, [key]);
  const take = (): void => {
    ask(request(known.value, typed.value)).then(
      ({ body }) => {
        const found = body.kind === "looked_up" ? body.values[0] : undefined;
        if (found !== undefined) setField(path, found.text, `coupling to ${name}`);
      },
      (reason: unknown) => (why.value = messageOf(reason)),
    );
  };
  return (
    <div class="door">
      <p>
        {name}:{" "}
        {told.value
          .filter((value) => value.name !== "coupling g")
          .map((value, i) => (
            <span key={value.name}>
              {i > 0 && ", "}
              {value.name === "width" ? "Γ = " : value.name === "lifetime" ? "τ = " : ""}
              <Quantity text={value.text} />
            </span>
          ))}
      </p>
      <div class="fields">
        <Choice label="Or give" value={known.value} options={KNOWN} onChange={(next) => (known.value = next)} />
        <div class="field">
          <label>
            {known.value === "width" ? "Γ" : "τ"} into {name}
            <input type="text" autocomplete="off" spellcheck={false} value={typed.value} placeholder={known.value === "width" ? "0.3 keV" : "1e-20 s"} onInput={(event) => (typed.value = event.currentTarget.value)} />
          </label>
        </div>
        <div class="field field-buttons">
          <button type="button" class="button" disabled={typed.value === ""} onClick={take}>
            Set the coupling
          </button>
        </div>
      </div>
      {why.value && (
        <p class="problem" role="status">
          {why.value}
        </p>
      )}
    </div>
  );
}

function messageOf(reason: unknown): string {
  return reason instanceof Error ? reason.message : String(reason);
}
