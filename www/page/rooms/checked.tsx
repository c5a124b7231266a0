/** What the numbers were checked against: written by `cargo xtask validate`, read when it is opened. */
import type { JSX } from "preact";
import { useSignal } from "@preact/signals";
import text from "../checked.json?raw";

/** Quantity and source; where there is something to compare with, tolerance and largest deviation found. */
type Row = [quantity: string, source: string, tolerance?: string, largest?: string];

/** The list, behind one tap. */
export function Checked(): JSX.Element {
  const wanted = useSignal(false);
  return (
    <details class="look-up" onToggle={(event) => (wanted.value = event.currentTarget.open)}>
      <summary>What this was checked against</summary>
      {wanted.value && (
        <dl class="checked">
          {(JSON.parse(text) as Row[]).map(([quantity, source, tolerance, largest]) => (
            <div key={quantity}>
              <dt>{quantity}</dt>
              <dd class="note">
                {tolerance === undefined ? `Not checked, no data found: ${source}` : `${source}. Within ${tolerance}${largest ? `, largest deviation ${largest}` : ""}`}
              </dd>
            </div>
          ))}
        </dl>
      )}
    </details>
  );
}
