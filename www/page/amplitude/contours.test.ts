import { describe, expect, it } from "vitest";
import { contours, levels } from "./contours";

describe("lines of equal value", () => {
  it("lie on the circle of a paraboloid", () => {
    const at = (x: number, y: number): number => (x - 20) ** 2 + (y - 20) ** 2;
    const pieces = contours(41, 41, at, [100, 1e6])[0] ?? [];
    expect(pieces.length).toBeGreaterThan(40);
    for (const [x1 = 0, y1 = 0, x2 = 0, y2 = 0] of pieces) {
      // Linear between places: the sagitta of a unit cell on a circle of radius 10 is 1/80.
      for (const [x, y] of [[x1, y1], [x2, y2]] as const) expect(Math.abs(Math.hypot(x - 20, y - 20) - 10)).toBeLessThan(0.02);
    }
  });
  it("are at round numbers inside the range", () => {
    expect(levels(0, 350)).toEqual([0.01, 0.1, 1, 10, 100]);
    expect(levels(0.9, 4)).toEqual([1, 1.5, 2, 3]);
    expect(levels(0, 0)).toEqual([]);
  });
});
