/** Everything at the cursor, in one row that never moves: W, the number to dial, cross sections, rate. */
import type { ComponentChildren, JSX } from "preact";
import { axisScale, digits, fixed } from "../format/number";
import { assumptionsOf } from "../hand-over/assumptions";
import { BEHIND } from "../parts/formulas";
import { Quantity, units } from "../parts/quantity";
import { Why } from "../parts/why";
import { WhyList } from "../parts/why-list";
import { atCursor, curve } from "../state/answers";
import { sheet } from "../state/sheet";
import { cursor, view } from "../state/view";

/** The row. */
export function ReadOut(): JSX.Element {
  const here = atCursor.value;
  return (
    <dl class="read-out" data-resting={cursor.value === null}>
      {here === null ? (
        <Item name="Cursor">
          <span class="quiet">point at the plot</span>
        </Item>
      ) : (
        <>
          <Item name={<span class="sym">W</span>} strong>
            {energy(here.w)} <span class="unit">{axisScale(here.w, here.w).unit}</span>
          </Item>
          <Item name="to dial" strong>
            <Quantity text={here.dial} />
          </Item>
          {here.values.map((entry) => (
            <Item key={entry.name} name={entry.name}>
              <Explained name={entry.name} at={here.w}>
                {digits(entry.value)}
              </Explained>{" "}
              <span class="unit">{units(entry.unit)}</span>
            </Item>
          ))}
        </>
      )}
    </dl>
  );
}

function Item(props: { name: ComponentChildren; children: ComponentChildren; strong?: boolean }): JSX.Element {
  return (
    <div class={props.strong ? "strong" : ""}>
      <dt>{props.name}</dt>
      <dd>{props.children}</dd>
    </div>
  );
}

/** A number with its formula behind it, where there is one. */
function Explained(props: { name: string; at: number; children: ComponentChildren }): JSX.Element {
  const behind = BEHIND[props.name.toLowerCase()];
  if (behind === undefined) return <>{props.children}</>;
  const { unit, per } = axisScale(props.at, props.at);
  return (
    <Why title={`${props.name} at W = ${fixed(props.at / per, 3)} ${unit}`} value={props.children}>
      <WhyList
        behind={behind}
        inputs={assumptionsOf(sheet.value)}
        accuracy={digits(curve.value?.accuracy ?? Number.NaN, 1)}
      />
    </Why>
  );
}

/** The same in words, for assistive technology. */
export function readOutText(): string {
  const here = atCursor.value;
  if (here === null) return "no energy chosen";
  const parts = here.values.map((entry) => `${entry.name} ${digits(entry.value)} ${entry.unit}`);
  return [`W ${energy(here.w)} ${axisScale(here.w, here.w).unit}`, `to dial ${here.dial}`, ...parts].join(", ");
}

/** An energy on the axis' own scale, to a hundredth of a pixel or so. */
function energy(w: number): string {
  const { from, to } = view.value;
  const { per } = axisScale(w, w);
  const step = (to - from) / per / 1000;
  const decimals = Math.max(0, Math.min(8, Math.ceil(-Math.log10(step))));
  return fixed(w / per, decimals);
}
