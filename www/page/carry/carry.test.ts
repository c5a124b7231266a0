import { deflateSync } from "fflate";
import encodeQR from "qr";
import decodeQR from "qr/decode.js";
import { describe, expect, it } from "vitest";
import { decode45, encode45 } from "./base45";
import { fromAddress, MOST_BYTES, pack, toAddress, unpack, Unreadable } from "./pack";
import { checksum, collect, MOST_CODES, missing, seriesOf, textOf, type Collected } from "./series";

const bytes = (text: string): Uint8Array => new TextEncoder().encode(text);

/** Text that does not shrink, from a small generator with a seed. */
function noise(length: number, seed: number): string {
  let state = seed;
  return Array.from({ length }, () => {
    state = (state * 1664525 + 1013904223) % 4294967296;
    return String.fromCharCode(33 + (state >>> 16) % 90);
  }).join("");
}

describe("Base45", () => {
  it("gives the examples of RFC 9285, section 4.3 and 4.4", () => {
    expect(encode45(bytes("AB"))).toBe("BB8");
    expect(encode45(bytes("Hello!!"))).toBe("%69 VD92EX0");
    expect(encode45(bytes("base-45"))).toBe("UJCLQE7W581");
    expect(new TextDecoder().decode(decode45("QED8WEX0"))).toBe("ietf!");
  });
  it("refuses what is no Base45", () => {
    for (const wrong of ["a", "GGW", "::", "BB8B", "é12"]) expect(() => decode45(wrong)).toThrow(Unreadable);
  });
  it("brings every byte back", () => {
    for (const length of [0, 1, 2, 3, 255, 256]) {
      const before = Uint8Array.from({ length }, (_, index) => (index * 37) & 255);
      expect(decode45(encode45(before))).toEqual(before);
    }
  });
});

describe("packing", () => {
  it("brings text back, through an address too", () => {
    for (const text of ["", "Γ = 0.62 MeV ± 3 %", "x".repeat(100_000), noise(5000, 3)]) {
      expect(unpack(pack(text))).toBe(text);
      expect(unpack(fromAddress(toAddress(pack(text))))).toBe(text);
    }
  });
  it("refuses damage and what is cut short", () => {
    const packed = pack(noise(3000, 5));
    expect(() => unpack(packed.subarray(0, packed.length - 9))).toThrow(Unreadable);
    expect(() => unpack(new Uint8Array())).toThrow(Unreadable);
    expect(() => fromAddress("*")).toThrow(Unreadable);
  });
  it("stops a bomb at the limit", () => {
    const bomb = deflateSync(new Uint8Array(MOST_BYTES + 1_000_000));
    expect(() => unpack(bomb)).toThrow(/more than/);
  });
});

describe("a series of codes", () => {
  it("has the checksum of the standard's check value", () => {
    // CRC-32/ISO-HDLC of "123456789" is CBF43926 (catalogue check value, from memory).
    expect(checksum(bytes("123456789"))).toBe("CBF43926");
  });
  it("is put together in any order, codes read twice included", () => {
    const text = noise(3000, 7);
    const codes = seriesOf(text);
    expect(codes.length).toBeGreaterThan(3);
    let got: Collected | null = null;
    for (const code of [...codes].reverse().concat(codes[1] ?? "")) got = collect(got, code);
    expect(got && missing(got)).toEqual([]);
    expect(got && textOf(got)).toBe(text);
  });
  it("says which codes are missing", () => {
    const codes = seriesOf(noise(3000, 9));
    const got = collect(collect(null, codes[0] ?? ""), codes[2] ?? "");
    expect(missing(got)).toEqual(codes.map((_, index) => index + 1).filter((number) => number !== 1 && number !== 3));
  });
  it("never mixes two sheets", () => {
    const got = collect(collect(null, seriesOf(noise(3000, 1))[0] ?? ""), seriesOf(noise(3000, 2))[1] ?? "");
    expect(got.pieces.filter((piece) => piece !== null)).toHaveLength(1);
  });
  it("refuses foreign, newer and damaged codes and sheets that are too long", () => {
    const [code = ""] = seriesOf("a sheet");
    expect(() => collect(null, "https://example.org/")).toThrow(/does not carry/);
    expect(() => collect(null, code.replace(":1:", ":2:"))).toThrow(/newer/);
    expect(() => collect(null, code.replace("1/1", "3/2"))).toThrow(/damaged/);
    expect(() => textOf(collect(null, code.replace(/.$/, (last) => (last === "0" ? "1" : "0"))))).toThrow(Unreadable);
    expect(() => seriesOf(noise(40_000, 4))).toThrow(String(MOST_CODES));
  });
  it("survives being drawn and read by the QR library", () => {
    const text = noise(700, 11);
    let got: Collected | null = null;
    for (const code of seriesOf(text)) {
      const modules = encodeQR(code, "raw", { ecc: "medium", border: 4 });
      const scale = 4;
      const width = modules.length * scale;
      const data = new Uint8ClampedArray(width * width * 4).fill(255);
      for (let y = 0; y < width; y += 1)
        for (let x = 0; x < width; x += 1)
          if (modules[Math.floor(y / scale)]?.[Math.floor(x / scale)]) data.fill(0, 4 * (y * width + x), 4 * (y * width + x) + 3);
      got = collect(got, decodeQR({ width, height: width, data }));
    }
    expect(got && textOf(got)).toBe(text);
  });
});
