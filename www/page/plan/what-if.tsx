/** What if there were more hours, or fewer: drag them and read the error at the end, from the curve the plan came with. */
import type { JSX } from "preact";
import { useSignal } from "@preact/signals";
import { digits, hours } from "../format/number";
import { units } from "../parts/quantity";

interface WhatIfProps {
  /** (hours of beam, error in `unit`), hours ascending. */
  known: readonly (readonly [number, number])[];
  symbol: string;
  unit: string;
  /** Hours of the plan. */
  planned: number;
}

/** The slider and the number. */
export function WhatIf({ known, symbol, unit, planned }: WhatIfProps): JSX.Element | null {
  const wanted = useSignal<number | null>(null);
  if (known.length < 2) return null;
  const near = nearest(known, wanted.value ?? planned);
  const [at, error] = known[near] ?? [0, 0];
  const [, now] = known[nearest(known, planned)] ?? [0, 0];
  return (
    <div class="field">
      <label for="what-if">What if there were other hours of beam</label>
      <input
        id="what-if"
        class="slider"
        type="range"
        min={0}
        max={known.length - 1}
        step={1}
        value={near}
        aria-valuetext={`${hours(at)}: error of ${symbol} ${digits(error, 2)} ${unit}`}
        onInput={(event) => (wanted.value = known[Number(event.currentTarget.value)]?.[0] ?? null)}
      />
      <p role="status" data-what-if>
        After {hours(at)}: error of {symbol} <strong>{digits(error, 2)}</strong> {units(unit)}
        {error !== now && <span class="note">, {digits(error / now, 2)} of what the plan of {hours(planned)} brings</span>}
      </p>
    </div>
  );
}

function nearest(known: WhatIfProps["known"], to: number): number {
  let best = 0;
  known.forEach(([at], i) => {
    if (Math.abs(at - to) < Math.abs((known[best]?.[0] ?? 0) - to)) best = i;
  });
  return best;
}
