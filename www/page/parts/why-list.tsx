/** The inside of "why this number": formula, inputs with values, accuracy, source. */
import type { JSX } from "preact";
import type { Behind } from "./formulas";
import { units } from "./quantity";

/** The explanation. */
export function WhyList(props: { behind: Behind; inputs: readonly (readonly [string, string])[]; accuracy: string }): JSX.Element {
  return (
    <>
      {props.behind.formula}
      <p>{props.behind.words}</p>
      <dl class="inputs">
        {props.inputs.map(([name, text]) => (
          <div key={name}>
            <dt>{name}</dt>
            <dd>{units(text)}</dd>
          </div>
        ))}
        <div>
          <dt>Relative accuracy reached</dt>
          <dd>{props.accuracy}</dd>
        </div>
      </dl>
      <p class="note">{props.behind.source}</p>
    </>
  );
}
