import { describe, expect, it } from "vitest";
// @ts-expect-error plain JavaScript of the build
import { encode85 } from "../../build/base85.mjs";
import { decode85, DIGITS } from "./base85";

describe("bytes in the text of the page", () => {
  it("come back, whatever their number", () => {
    for (let length = 0; length < 40; length += 1) {
      const bytes = Uint8Array.from({ length }, (_, index) => (index * 151 + length * 7) & 255);
      expect(decode85(encode85(bytes))).toEqual(bytes);
    }
    const full = new Uint8Array(9).fill(255);
    expect(decode85(encode85(full))).toEqual(full);
  });
  it("use only characters that end no script and are one byte each", () => {
    expect(new Set(DIGITS).size).toBe(85);
    expect(DIGITS).not.toMatch(/[<>&"'`\\\s]/);
  });
  it("are refused when damaged", () => {
    expect(() => decode85("ab<de")).toThrow(/damaged/);
  });
});
