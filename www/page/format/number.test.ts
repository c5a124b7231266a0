import { describe, expect, it } from "vitest";
import { ago, count, decimalsOfError, digits, fixed, hours, pValue, withError } from "./number";

describe("numbers as they are written", () => {
  it("quote an error to two digits and the value with it", () => {
    expect(withError(1019.45557, 0.00841, { unit: "MeV", per: 1 })).toEqual({ value: "1019.4556", error: "0.0084" });
    expect(decimalsOfError(0.0996)).toBe(2);
    expect(decimalsOfError(44)).toBe(0);
  });

  it("write powers of ten where decimals would mislead", () => {
    expect(digits(3.25e-7, 3)).toBe("3.25·10⁻⁷");
    expect(digits(14.7642)).toBe("14.76");
  });

  it("have a true minus sign and say when there is no number", () => {
    expect(fixed(-1.5, 1)).toBe("−1.5");
    expect(digits(Number.NaN)).toBe("–");
  });

  it("keep counts whole and times readable", () => {
    expect(count(185)).toBe("185");
    expect(count(9.41)).toBe("9.41");
    expect(hours(1.5)).toBe("1\u2009h\u200930");
    expect(ago(61_000)).toBe("1\u2009min ago");
  });

  it("bound a small p-value instead of rounding it to nothing", () => {
    expect(pValue(3e-7)).toBe("< 0.0001");
  });
});
