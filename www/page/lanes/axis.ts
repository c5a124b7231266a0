/** Ticks of the shared energy axis. */
import { axisScale, fixed } from "../format/number";
import type { Range } from "../state/view";

/** Width of the value axis on the left, CSS pixels; the same in every lane so that energies line up. */
export const GUTTER = 62;
/** Room on the right, so that the last label is whole. */
export const MARGIN = 14;

/** Text of tick energies (GeV) in the axis unit, with the decimals that tell neighbours apart. */
export function tickTexts(splits: readonly number[], range: Range): string[] {
  const { per } = axisScale(range.from, range.to);
  const step = splits.length > 1 ? Math.abs((splits[1] ?? 0) - (splits[0] ?? 0)) / per : 1;
  let decimals = 0;
  while (decimals < 9 && Math.abs(step * 10 ** decimals - Math.round(step * 10 ** decimals)) > 1e-6) decimals += 1;
  return splits.map((w) => fixed(w / per, decimals));
}

/** Where an energy lies, as a share of the axis. */
export function shareOf(w: number, range: Range): number {
  return (w - range.from) / (range.to - range.from);
}

/** Energy at a share of the axis. */
export function energyAt(share: number, range: Range): number {
  return range.from + share * (range.to - range.from);
}
