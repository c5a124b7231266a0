/** Text of a number with its unit, split so that a slider can move the number and leave the unit as typed. */

const NUMBER = /^\s*([+\-−]?(?:\d+\.?\d*|\.\d+)(?:[eE][+\-−]?\d+)?)(\(\d+(?:\.\d+)?\))?(.*)$/s;

/** A typed number in its parts. */
export interface Typed {
  /** The number, in the unit as typed. */
  value: number;
  /** Decimals it was typed with. */
  decimals: number;
  /** All that follows: unit, error. */
  rest: string;
}

/** Takes typed text apart; `null` if it does not begin with a number. */
export function typed(text: string): Typed | null {
  const match = NUMBER.exec(text);
  if (match === null) return null;
  const digits = (match[1] ?? "").replace("−", "-");
  const value = Number(digits);
  if (!Number.isFinite(value)) return null;
  const point = digits.search(/[.]/);
  const end = digits.search(/[eE]/);
  const decimals = point < 0 || end >= 0 ? 0 : digits.length - point - 1;
  return { value, decimals, rest: match[3] ?? "" };
}

/** The text with another number in it, unit kept. */
export function withNumber(text: string, value: number, decimals: number): string {
  const parts = typed(text);
  return `${value.toFixed(Math.max(0, Math.min(12, decimals)))}${parts?.rest ?? ""}`;
}

/** The unit alone, for a table that shows it in the header. */
export function unitOf(text: string): string {
  return (typed(text)?.rest ?? "").trim();
}
