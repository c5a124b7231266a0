import { describe, expect, it } from "vitest";
import { binsOf, listOf } from "./bins";
import { exitStrength } from "./channels";
import { cellsOf } from "./matrix";

describe("what is typed into the fit room", () => {
  it("reads edges and counts of angular bins", () => {
    expect(listOf(" 0, 0.25;0.5  1 ")).toEqual(["0", "0.25", "0.5", "1"]);
    expect(binsOf(["-1", "0", "1"], ["40", "58"])).toEqual([
      { from: "-1", to: "0", counts: "40" },
      { from: "0", to: "1", counts: "58" },
    ]);
    expect(binsOf(["-1", "0", "1"], ["40"])).toBeNull();
    expect(binsOf(["0"], [])).toBeNull();
  });

  it("reads a pasted matrix with its units", () => {
    expect(cellsOf("0.0036 MeV^2\t0.001 MeV^2\n0.001 MeV^2,0.0036 MeV^2\n\n")).toEqual([
      ["0.0036 MeV^2", "0.001 MeV^2"],
      ["0.001 MeV^2", "0.0036 MeV^2"],
    ]);
  });

  it("knows which part of a strength is the exit's", () => {
    expect(exitStrength({ kind: "branchings", b_in: "1e-4", b_f: "0.8" })).toEqual({ text: "0.8", label: "Bf" });
    expect(exitStrength({ kind: "gamma_in_bf", value: "24.6 eV" }).text).toBe("24.6 eV");
  });
});
