/** Lines of equal value over a grid: straight pieces through each cell. */

/** Pieces of the line at `level`: [x1, y1, x2, y2] in cells, for `at(x, y)` on `nx` by `ny` places. */
export function contour(nx: number, ny: number, at: (x: number, y: number) => number, level: number): number[][] {
  const pieces: number[][] = [];
  for (let y = 0; y + 1 < ny; y += 1) {
    for (let x = 0; x + 1 < nx; x += 1) {
      const corners = [at(x, y), at(x + 1, y), at(x + 1, y + 1), at(x, y + 1)] as const;
      const places: [number, number][] = [];
      const edges = [[0, 1], [1, 2], [2, 3], [3, 0]] as const;
      for (const [i, j] of edges) {
        const [a, b] = [corners[i], corners[j]];
        if (a < level === b < level) continue;
        const part = (level - a) / (b - a);
        const [xi, yi] = [x + (i === 1 || i === 2 ? 1 : 0), y + (i >= 2 ? 1 : 0)];
        const [xj, yj] = [x + (j === 1 || j === 2 ? 1 : 0), y + (j >= 2 ? 1 : 0)];
        places.push([xi + part * (xj - xi), yi + part * (yj - yi)]);
      }
      // A saddle has four places: the pairs as they come.
      for (let k = 0; k + 1 < places.length; k += 2) pieces.push([...(places[k] ?? []), ...(places[k + 1] ?? [])]);
    }
  }
  return pieces;
}

/** Levels that are round numbers, one to a decade, or halves of it where a decade is all there is. */
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
