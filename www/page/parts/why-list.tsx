/** The inside of "why this number": formula, inputs with values, accuracy, source. */
import type { ComponentChildren, JSX } from "preact";
import { digits } from "../format/number";
import { assumptionsOf } from "../hand-over/assumptions";
import { curve } from "../state/answers";
import { sheet } from "../state/sheet";
import { behind } from "./formulas";
import { Formula } from "./math";
import { units } from "./quantity";
import { Why } from "./why";

/** Name and value of an input. */
export type Input = readonly [ComponentChildren, string];

interface WhyListProps {
  /** Name of the number; see `formulas.tsx`. */
  of: string;
  /** The number's own inputs; without them, all that the sheet assumes. */
  inputs?: readonly Input[] | (() => readonly Input[]) | undefined;
  children?: ComponentChildren;
}

/** The explanation. */
export function WhyList({ of, inputs, children }: WhyListProps): JSX.Element {
  const { formula, words, source, accuracy } = behind(of);
  return (
    <>
      <Formula text={formula} />
      <p>{words}</p>
      {children}
      <dl class="inputs">
        {(typeof inputs === "function" ? inputs() : (inputs ?? assumptionsOf(sheet.value))).map(([name, text], i) => (
          <div key={i}>
            <dt>{name}</dt>
            <dd>{units(text)}</dd>
          </div>
        ))}
        <div>
          <dt>Accuracy</dt>
          <dd>{accuracy ?? `${digits(curve.value?.accuracy ?? Number.NaN, 1)} of itself, for the hypothesis as it stands`}</dd>
        </div>
      </dl>
      <p class="note">{source}</p>
    </>
  );
}

/** A number with all that is behind it. */
export function Explained(props: WhyListProps & { title?: string; value: ComponentChildren }): JSX.Element {
  return (
    <Why title={capital(props.title ?? props.of)} value={props.value}>
      <WhyList {...props} />
    </Why>
  );
}

function capital(text: string): string {
  return text.charAt(0).toUpperCase() + text.slice(1);
}
