import { describe, expect, it } from "vitest";
import { typed, unitOf, withNumber } from "./typed";

describe("typed numbers", () => {
  it("are taken apart without losing what follows", () => {
    expect(typed("2874.20(5) MeV")).toEqual({ value: 2874.2, decimals: 2, rest: " MeV" });
    expect(typed("9.0e30 cm^-2 s^-1")?.rest).toBe(" cm^-2 s^-1");
    expect(typed("MeV")).toBeNull();
  });

  it("keep their unit when a slider moves them", () => {
    expect(withNumber("0.62 MeV", 0.7, 2)).toBe("0.70 MeV");
    expect(unitOf("129.6 nb^-1")).toBe("nb^-1");
  });
});
