/** Profile intervals beside the curvature errors, and what follows from the fitted parameters. */
import type { JSX } from "preact";
import { THIN, withError } from "../format/number";
import { units } from "../parts/quantity";
import { Sym } from "../parts/sym";
import { symbolOf } from "../state/parameters";
import { sheet } from "../state/sheet";
import type { Body } from "../state/types";
import { ask } from "../state/work";
import { study } from "./study";
import { Cautions, StudyBar } from "./study-bar";

type Found = Extract<Body, { kind: "intervals" }>;
type End = Found["parameters"][number]["one"][number];

const intervals = study<Found>();

function run(): void {
  void intervals.run(async (now, options) => {
    const { body } = await ask({ kind: "intervals", sheet: now }, options);
    if (body.kind !== "intervals") throw new Error("no intervals in the answer");
    return body;
  });
}

/** Button and tables. */
export function Intervals(): JSX.Element {
  const made = intervals.made.value?.value;
  return (
    <fieldset>
      <legend>Intervals</legend>
      <StudyBar study={intervals} words="Intervals" onRun={run} />
      {made && <Table made={made} />}
    </fieldset>
  );
}

function Table({ made }: { made: Found }): JSX.Element {
  return (
    <>
      <div class="table-box" tabIndex={0} role="region" aria-label="Profile intervals">
        <table class="plain intervals">
          <thead>
            <tr>
              <th scope="col">Parameter</th>
              <th scope="col" class="number">Value</th>
              <th scope="col" class="number">Curvature</th>
              <th scope="col" class="number">68.3 %</th>
              <th scope="col" class="number">95.4 %</th>
              <th scope="col">Unit</th>
            </tr>
          </thead>
          <tbody>
            {made.parameters.map(({ parameter, one, two }) => {
              const text = withError(parameter.value, parameter.error, { unit: parameter.unit, per: 1 });
              return (
                <tr key={parameter.id}>
                  <th scope="row" title={parameter.name}>
                    <Sym text={symbolOf(parameter.id, sheet.value)} />
                  </th>
                  <td class="number strong">{text.value}</td>
                  <td class="number">{text.error === "" ? "–" : `±${THIN}${text.error}`}</td>
                  <td class="number">
                    <Ends ends={one} />
                  </td>
                  <td class="number">
                    <Ends ends={two} />
                  </td>
                  <td>{units(parameter.unit)}</td>
                </tr>
              );
            })}
          </tbody>
        </table>
      </div>
      <p class="note">
        Where 2 NLL rises by 1 and by 4, everything else fitted again. Where the two sides differ, quote these instead of the
        curvature error.
      </p>
      {made.derived.length > 0 && (
        <table class="plain">
          <caption>What follows from them</caption>
          <tbody>
            {made.derived.map((derived) => (
              <tr key={derived.id}>
                <th scope="row">{derived.name}</th>
                <td class="number">{units(shown(derived.text))}</td>
              </tr>
            ))}
          </tbody>
        </table>
      )}
      <Cautions warnings={made.warnings} />
    </>
  );
}

function Ends({ ends }: { ends: readonly [End, End] }): JSX.Element {
  return (
    <>
      {ends.map((end, i) => (
        <span class={end.found ? "end" : "end quiet"} key={i}>
          {shown(end.text)}
        </span>
      ))}
    </>
  );
}

function shown(text: string): string {
  return text.replace(/\+- ?/, `±${THIN}`).replace(/^-/, "−");
}
