/** Everything at the cursor, in one row that never moves: W, the number to dial, cross sections, rate. */
import type { JSX } from "preact";
import { axisScale, digits, fixed } from "../format/number";
import { atCursor } from "../state/answers";
import { cursor, view } from "../state/view";

/** The row. */
export function ReadOut(): JSX.Element {
  const here = atCursor.value;
  return (
    <dl class="read-out" data-resting={cursor.value === null}>
      {here === null ? (
        <div>
          <dt>Cursor</dt>
          <dd class="quiet">point at the plot</dd>
        </div>
      ) : (
        <>
          <Item name={<span class="sym">W</span>} value={energy(here.w)} unit={axisScale(here.w, here.w).unit} strong />
          <Item name="to dial" value={here.dial} unit="" strong />
          {here.values.map((entry) => (
            <Item key={entry.name} name={entry.name} value={digits(entry.value)} unit={entry.unit} />
          ))}
        </>
      )}
    </dl>
  );
}

function Item(props: { name: string | JSX.Element; value: string; unit: string; strong?: boolean }): JSX.Element {
  return (
    <div class={props.strong ? "strong" : ""}>
      <dt>{props.name}</dt>
      <dd>
        {props.value}
        {props.unit && <span class="unit"> {props.unit}</span>}
      </dd>
    </div>
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
