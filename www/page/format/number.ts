/** Numbers as a physicist writes them. Only scales by powers of ten and rounds; never computes physics. */

/** Thin space between number and unit. */
export const THIN = "\u2009";
const MINUS = "\u2212";

/** A scale of one quantity: how many base units make one of this unit. */
export interface Scale {
  unit: string;
  per: number;
}

const ENERGIES: Scale[] = [
  { unit: "TeV", per: 1e3 },
  { unit: "GeV", per: 1 },
  { unit: "MeV", per: 1e-3 },
  { unit: "keV", per: 1e-6 },
  { unit: "eV", per: 1e-9 },
];

const CROSS_SECTIONS: Scale[] = [
  { unit: "mb", per: 1e6 },
  { unit: "µb", per: 1e3 },
  { unit: "nb", per: 1 },
  { unit: "pb", per: 1e-3 },
  { unit: "fb", per: 1e-6 },
];

/** Unit in which a value reads best (1 to 9999 of it where possible). */
export function scaleOf(value: number, kind: "energy" | "cross section"): Scale {
  const table = kind === "energy" ? ENERGIES : CROSS_SECTIONS;
  const size = Math.abs(value);
  const fit = table.find((scale) => size >= scale.per);
  return fit ?? table[table.length - 1] ?? { unit: "", per: 1 };
}

/** Unit of an energy axis: MeV up to 10 GeV, GeV above. */
export function axisScale(from: number, to: number): Scale {
  const span = to - from;
  if (to >= 1000) return { unit: "TeV", per: 1e3 };
  return to < 12 || span < 0.05 ? { unit: "MeV", per: 1e-3 } : { unit: "GeV", per: 1 };
}

/** Decimals to which an error is quoted: two significant digits, so that 44 and 46 keV stay apart. */
export function decimalsOfError(error: number): number {
  if (!(error > 0) || !Number.isFinite(error)) return 0;
  return Math.max(0, 1 - Math.floor(Math.log10(Number(error.toPrecision(2)))));
}

/** Fixed decimals with a true minus sign. */
export function fixed(value: number, decimals: number): string {
  if (!Number.isFinite(value)) return "–";
  const text = value.toFixed(Math.min(15, Math.max(0, decimals)));
  return text.replace("-", MINUS);
}

/** A number to so many significant digits, without an exponent where that reads well. */
export function digits(value: number, count = 4): string {
  if (!Number.isFinite(value)) return "–";
  if (value === 0) return "0";
  const exponent = Math.floor(Math.log10(Math.abs(value)));
  if (exponent < -4 || exponent > 6) {
    const mantissa = fixed(value / 10 ** exponent, count - 1);
    return `${mantissa}·10${superscript(exponent)}`;
  }
  return fixed(value, Math.max(0, count - 1 - exponent));
}

/** A count: whole where it is whole, else (an expectation) to about a tenth of its own fluctuation. */
export function count(value: number): string {
  if (Number.isInteger(value)) return fixed(value, 0);
  return fixed(value, value >= 100 ? 0 : value >= 10 ? 1 : 2);
}

/** Value and error in one unit, rounded together. */
export function withError(value: number, error: number | null | undefined, scale: Scale): { value: string; error: string } {
  if (error === null || error === undefined || !(error > 0) || !Number.isFinite(error)) {
    return { value: digits(value / scale.per, 6), error: "" };
  }
  const decimals = decimalsOfError(error / scale.per);
  return { value: fixed(value / scale.per, decimals), error: fixed(error / scale.per, decimals) };
}

/** A signed number: its sign always shown. */
export function signed(value: number, decimals: number): string {
  const text = fixed(value, decimals);
  return value > 0 ? `+${text}` : text;
}

/** Hours as "3 h 20 min". */
export function hours(value: number): string {
  if (!Number.isFinite(value)) return "–";
  const minutes = Math.round(value * 60);
  if (Math.abs(minutes) < 60) return `${fixed(minutes, 0)}${THIN}min`;
  const whole = Math.trunc(minutes / 60);
  const rest = Math.abs(minutes % 60);
  return rest === 0 ? `${fixed(whole, 0)}${THIN}h` : `${fixed(whole, 0)}${THIN}h${THIN}${String(rest).padStart(2, "0")}`;
}

/** How long ago, coarse enough to read at a glance. */
export function ago(ms: number): string {
  const s = Math.max(0, Math.round(ms / 1000));
  if (s < 5) return "just now";
  if (s < 60) return `${s}${THIN}s ago`;
  const minutes = Math.round(s / 60);
  if (minutes < 60) return `${minutes}${THIN}min ago`;
  const h = Math.floor(minutes / 60);
  if (h < 48) return `${h}${THIN}h ${String(minutes % 60).padStart(2, "0")} ago`;
  return `${Math.round(h / 24)} days ago`;
}

/** A p-value: as a number down to 0.001, then as a bound. */
export function pValue(value: number): string {
  if (!Number.isFinite(value)) return "–";
  if (value < 1e-4) return "< 0.0001";
  return value < 0.01 ? value.toFixed(4) : value.toFixed(2);
}

function superscript(value: number): string {
  const marks = "⁰¹²³⁴⁵⁶⁷⁸⁹";
  return (value < 0 ? "⁻" : "") + [...String(Math.abs(value))].map((c) => marks[Number(c)] ?? "").join("");
}

/** A moment on the clock of this machine, with its day: "Tue 14:30". */
export function clock(ms: number): string {
  return new Date(ms).toLocaleString("en-GB", { weekday: "short", hour: "2-digit", minute: "2-digit", hourCycle: "h23" }).replace(",", "");
}

/** A share as percent. */
export function percent(share: number, decimals = 1): string {
  return `${fixed(share * 100, decimals)}${THIN}%`;
}
