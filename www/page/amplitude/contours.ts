/** Lines of equal value over a grid: straight pieces through each cell. */

/** Corners of a cell in the order of its edges. */
const CORNERS = [[0, 0], [1, 0], [1, 1], [0, 1]] as const;

/** Pieces of the lines at each of the levels (rising): [x1, y1, x2, y2] in cells, for `at(x, y)` on `nx` by `ny` places. */
export function contours(nx: number, ny: number, at: (x: number, y: number) => number, levels: readonly number[]): number[][][] {
  const found: number[][][] = levels.map(() => []);
  const value = [0, 0, 0, 0];
  for (let y = 0; y + 1 < ny; y += 1) {
    for (let x = 0; x + 1 < nx; x += 1) {
      value[0] = at(x, y);
      value[1] = at(x + 1, y);
      value[2] = at(x + 1, y + 1);
      value[3] = at(x, y + 1);
      const low = Math.min(value[0], value[1], value[2], value[3]);
      const high = Math.max(value[0], value[1], value[2], value[3]);
      for (let k = 0; k < levels.length; k += 1) {
        const level = levels[k] ?? 0;
        if (level > low && level <= high) cross(x, y, value, level, found[k] ?? []);
      }
    }
  }
  return found;
}

function cross(x: number, y: number, value: readonly number[], level: number, into: number[][]): void {
  const places: number[] = [];
  for (let i = 0; i < 4; i += 1) {
    const j = (i + 1) % 4;
    const [a, b] = [value[i] ?? 0, value[j] ?? 0];
    if (a < level === b < level) continue;
    const part = (level - a) / (b - a);
    const [from, to] = [CORNERS[i] ?? CORNERS[0], CORNERS[j] ?? CORNERS[0]];
    places.push(x + from[0] + part * (to[0] - from[0]), y + from[1] + part * (to[1] - from[1]));
  }
  // A saddle has four places: the pairs as they come.
  for (let k = 0; k + 3 < places.length; k += 4) into.push(places.slice(k, k + 4));
}

/** Levels that are round numbers, one to a decade, or parts of it where a decade is all there is. */
export function levels(least: number, most: number): number[] {
  if (!(most > 0)) return [];
  const top = Math.floor(Math.log10(most));
  const low = Math.max(least > 0 ? Math.log10(least) : -Infinity, top - 5);
  const wide = Math.log10(most) - low > 1.6;
  const found: number[] = [];
  for (let power = Math.floor(low); power <= top; power += 1) {
    for (const digit of wide ? [1] : [1, 1.5, 2, 3, 5, 7]) {
      const level = digit * 10 ** power;
      if (level > Math.max(least, 10 ** low) && level < most) found.push(level);
    }
  }
  return found;
}
