import { describe, expect, it } from "vitest";
import { units } from "./quantity";

describe("units as they are written", () => {
  it("have their powers set high", () => {
    expect(units("129.6 nb^-1")).toBe("129.6 nb⁻¹");
    expect(units("9.0e30 cm^-2 s^-1")).toBe("9.0e30 cm⁻² s⁻¹");
    expect(units("97 pb-1")).toBe("97 pb⁻¹");
  });

  it("leave signs and exponents of numbers alone", () => {
    expect(units("-130 deg")).toBe("-130 deg");
    expect(units("3.49e-4")).toBe("3.49e-4");
    expect(units("e- on e+")).toBe("e- on e+");
  });
});
