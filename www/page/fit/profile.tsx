/** Along one parameter or over two: how 2 NLL rises with everything else fitted again. */
import type { JSX } from "preact";
import { signal } from "@preact/signals";
import type { Reply } from "../../shared/protocol";
import { Choice } from "../parts/field";
import { parametersOf } from "../state/parameters";
import { sheet } from "../state/sheet";
import type { Warning } from "../state/types";
import { ask } from "../state/work";
import { Numbers, Plot } from "./plot";
import { study } from "./study";
import { Cautions, StudyBar } from "./study-bar";

/** Places along a profile and around a contour: enough for a smooth line of this size. */
const PLACES = 33;

interface Made {
  pair: boolean;
  columns: Reply["columns"];
  warnings: Warning[];
}

const profile = study<Made>();
const first = signal("");
const second = signal("");

function run(one: string, other: string): void {
  void profile.run(async (now, options) => {
    const { body, columns } = await ask(
      other === ""
        ? { kind: "profile", sheet: now, parameter: one, places: PLACES }
        : { kind: "contour", sheet: now, first: one, second: other, places: PLACES },
      options,
    );
    if (body.kind !== "profile" && body.kind !== "contour") throw new Error("no profile in the answer");
    return { pair: body.kind === "contour", columns, warnings: body.warnings };
  });
}

/** Choice, button, plot and table. */
export function Profile(): JSX.Element {
  const { free } = sheet.value.fit;
  const names = new Map(parametersOf(sheet.value).map(({ id, symbol, name }) => [id, `${symbol.replace(/_/g, "")}, ${name}`]));
  const one = free.includes(first.value) ? first.value : (free[0] ?? "");
  const other = free.includes(second.value) && second.value !== one ? second.value : "";
  const option = (id: string): [string, string] => [id, names.get(id) ?? id];
  const made = profile.made.value?.value;
  return (
    <fieldset>
      <legend>Profile and contour</legend>
      <div class="fields">
        <Choice label="Along" value={one} options={free.map(option)} onChange={(id) => (first.value = id)} />
        <Choice label="and" value={other} options={[["", "nothing else"], ...free.filter((id) => id !== one).map(option)]} onChange={(id) => (second.value = id)} />
      </div>
      <StudyBar study={profile} words={other === "" ? "Profile" : "Contour"} onRun={() => run(one, other)} />
      {made && (made.pair ? <Regions made={made} /> : <Rise made={made} />)}
      {made && <Cautions warnings={made.warnings} />}
    </fieldset>
  );
}

function Rise({ made }: { made: Made }): JSX.Element | null {
  const [at, rise] = made.columns;
  if (at === undefined || rise === undefined) return null;
  return (
    <>
      <Plot
        words={`Rise of 2 NLL along ${at.name}, with the levels 1 and 4.`}
        x={`${at.name}${at.unit && ` (${at.unit})`}`}
        y="rise of 2 NLL"
        from={0}
        lines={[{ x: at.values, y: rise.values, look: "main" }]}
        levels={[
          [1, "68.3 %"],
          [4, "95.4 %"],
        ]}
      />
      <Numbers name="Profile" columns={made.columns} most={PLACES} />
    </>
  );
}

function Regions({ made }: { made: Made }): JSX.Element | null {
  const [a, b, c, d] = made.columns;
  if (a === undefined || b === undefined || c === undefined || d === undefined) return null;
  const bare = (name: string): string => name.replace(/ \([\d.]+ %\)$/, "");
  const closed = (values: ArrayLike<number>): number[] => [...Array.from(values), values[0] ?? Number.NaN];
  return (
    <>
      <Plot
        words={`Regions of 68.3 % (inner) and 95.4 % (outer) for ${bare(a.name)} and ${bare(b.name)}.`}
        x={`${bare(a.name)}${a.unit && ` (${a.unit})`}`}
        y={`${bare(b.name)}${b.unit && ` (${b.unit})`}`}
        lines={[
          { x: closed(a.values), y: closed(b.values), look: "main" },
          { x: closed(c.values), y: closed(d.values), look: "second" },
        ]}
      />
      <p class="note">Inner line 68.3 %, outer line 95.4 %, for the two together (2 NLL up by 2.30 and 6.18).</p>
      <Numbers name="Contour" columns={made.columns} most={PLACES} significant={5} />
    </>
  );
}
