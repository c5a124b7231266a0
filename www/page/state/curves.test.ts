import { describe, expect, it } from "vitest";
import { affordable } from "./curves";

describe("energies of a curve", () => {
  it("are all of them where the machine is quick", () => {
    expect(affordable(0.001)).toBe(700);
  });

  it("are as many as fit into a frame where it is not, and never fewer than show a shape", () => {
    expect(affordable(0.1)).toBe(240);
    expect(affordable(50)).toBe(80);
  });
});
