/** A slider over a range that makes sense; moves the number of a typed field and leaves its unit alone. */
import type { JSX } from "preact";
import { useRef } from "preact/hooks";
import { typed, withNumber } from "../format/typed";
import { textAt } from "../state/path";
import { setField, sheet } from "../state/sheet";

/** Range in the unit as typed. */
export interface Reach {
  from: number;
  to: number;
  step: number;
}

interface SliderProps {
  path: string;
  name: string;
  /** The range, from the value where the drag began (so that it does not run away under the finger). */
  reach: (value: number) => Reach;
}

/** The slider; nothing where the field holds no number. */
export function Slider({ path, name, reach }: SliderProps): JSX.Element | null {
  const anchor = useRef<{ path: string; reach: Reach } | null>(null);
  const text = textAt(sheet.value, path);
  const now = typed(text);
  if (now === null) return null;
  const held = anchor.current;
  const inside = held !== null && held.path === path && now.value >= held.reach.from && now.value <= held.reach.to;
  const range = inside ? held.reach : reach(now.value);
  if (!inside) anchor.current = { path, reach: range };
  const decimals = Math.max(now.decimals, Math.ceil(-Math.log10(range.step)));
  return (
    <input
      class="slider"
      type="range"
      aria-label={name}
      aria-valuetext={text}
      min={range.from}
      max={range.to}
      step={range.step}
      value={now.value}
      onInput={(event) => setField(path, withNumber(text, Number(event.currentTarget.value), decimals), name)}
      onChange={() => {
        anchor.current = null;
      }}
    />
  );
}

/** A factor either way, for positive numbers such as a width or a strength. */
export function around(factor: number): (value: number) => Reach {
  return (value) => {
    const size = value > 0 ? value : 1;
    const step = 10 ** (Math.floor(Math.log10(size)) - 3);
    return { from: round(size / factor, step), to: round(size * factor, step), step };
  };
}

/** A fixed distance either way, for a position or a phase. */
export function within(distance: number, step: number): (value: number) => Reach {
  return (value) => ({ from: round(value - distance, step), to: round(value + distance, step), step });
}

function round(value: number, step: number): number {
  return Number((Math.round(value / step) * step).toPrecision(14));
}
