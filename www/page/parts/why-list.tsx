/** The inside of "why this number": formula, inputs with values, accuracy, source. */
import type { JSX } from "preact";
import { digits } from "../format/number";
import { assumptionsOf } from "../hand-over/assumptions";
import { curve } from "../state/answers";
import { sheet } from "../state/sheet";
import type { Behind } from "./formulas";
import { units } from "./quantity";

/** The explanation. */
export function WhyList({ behind }: { behind: Behind }): JSX.Element {
  return (
    <>
      {behind.formula}
      <p>{behind.words}</p>
      <dl class="inputs">
        {assumptionsOf(sheet.value).map(([name, text]) => (
          <div key={name}>
            <dt>{name}</dt>
            <dd>{units(text)}</dd>
          </div>
        ))}
        <div>
          <dt>Relative accuracy reached</dt>
          <dd>{digits(curve.value?.accuracy ?? Number.NaN, 1)}</dd>
        </div>
      </dl>
      <p class="note">{behind.source}</p>
    </>
  );
}
