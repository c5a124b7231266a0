/** Keys worth knowing; none is needed. */
import type { JSX } from "preact";

const KEYS: readonly (readonly [string, string])[] = [
  ["Ctrl Z, Ctrl Y", "take back, do again"],
  ["← →", "move the cursor (Shift: faster), once it has the focus"],
  ["↑ ↓", "cursor to the next point, up or down in energy"],
  ["+ − 0", "zoom in, out, whole scan"],
  ["Page up, Page down", "slide along the axis"],
  ["Enter, ↑ ↓ in the table", "next cell of the column"],
];

/** The list. */
export function Keys(): JSX.Element {
  return (
    <fieldset>
      <legend>Keys</legend>
      <dl class="inputs">
        {KEYS.map(([keys, what]) => (
          <div key={keys}>
            <dt>{keys}</dt>
            <dd>{what}</dd>
          </div>
        ))}
      </dl>
    </fieldset>
  );
}
