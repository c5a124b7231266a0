/** Everything at the cursor, in one row that never moves: W, the number to dial, cross sections, rate. */
import type { ComponentChildren, JSX } from "preact";
import { axisScale, fixed } from "../format/number";
import { Quantity } from "../parts/quantity";
import { Explained } from "../parts/why-list";
import { atCursor } from "../state/answers";
import { calibration } from "../state/health";
import type { Named } from "../state/types";
import { everything } from "../state/prefs";
import { cursor, view } from "../state/view";
import { shown } from "./list";

/** What is read out at all times; the rest is one gesture away. */
const FIRST = new Set(["observed", "radiated", "born", "rate"]);

/** The row. */
export function ReadOut(): JSX.Element {
  const here = atCursor.value;
  const others = here?.values.filter((entry) => !FIRST.has(entry.name.toLowerCase())) ?? [];
  const rest = everything.value && here !== null ? [...others, ...shown.value.flatMap((lane) => lane.readOut?.(here.w) ?? [])] : others;
  return (
    <div class="read-out" data-resting={cursor.value === null}>
      <dl>
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
              {here.dial === "" ? <span class="quiet">out of reach</span> : <Explained of="to dial" title={at("The number to dial", here.w)} inputs={calibration.value} value={<Quantity text={here.dial} />} />}
            </Item>
            {here.values
              .filter((entry) => FIRST.has(entry.name.toLowerCase()))
              .map((entry) => (
                <Item key={entry.name} name={entry.name}>
                  <Explained of={entry.name} title={at(entry.name, here.w)} value={<Quantity text={entry.text} />} />
                </Item>
              ))}
          </>
        )}
      </dl>
      {rest.length > 0 && (
        <button type="button" class="link" aria-expanded={everything.value} onClick={() => (everything.value = !everything.value)}>
          {everything.value ? "Less" : "More"}
        </button>
      )}
      {everything.value && rest.length > 0 && (
        <dl class="read-out-more">
          {rest.map((entry) => (
            <Item key={entry.name} name={entry.name}>
              {others.includes(entry as Named) && here !== null ? (
                <Explained of={entry.name} title={at(entry.name, here.w)} value={<Quantity text={entry.text} />} />
              ) : (
                <Quantity text={entry.text} />
              )}
            </Item>
          ))}
        </dl>
      )}
    </div>
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

/** "observed at W = 2874.20 MeV". */
function at(name: string, w: number): string {
  const { unit, per } = axisScale(w, w);
  return `${name} at W = ${fixed(w / per, 3)} ${unit}`;
}

/** The same in words, for assistive technology. */
export function readOutText(): string {
  const here = atCursor.value;
  if (here === null) return "no energy chosen";
  const parts = here.values.filter((entry) => FIRST.has(entry.name.toLowerCase())).map((entry) => `${entry.name} ${entry.text}`);
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
