// What comes in by link or camera is not trusted: any text is read or refused in words, nothing else.
// VITE_CARRY_SECONDS makes a longer run of it (default: some hundred cases each).
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { decode45, encode45 } from "./base45";
import { fromAddress, pack, toAddress, unpack, Unreadable } from "./pack";
import { collect, missing, seriesOf, textOf, type Collected } from "./series";

const seconds = Number(import.meta.env["VITE_CARRY_SECONDS"] ?? 0);
const how = seconds > 0 ? { interruptAfterTimeLimit: 1000 * seconds, numRuns: 1e9 } : { numRuns: 300 };
const timeout = 30_000 + 5000 * seconds;

/** Whether the work ended, or was refused as it should be. */
function readOrRefused(work: () => unknown): void {
  try {
    work();
  } catch (reason) {
    if (!(reason instanceof Unreadable)) throw reason;
    expect(reason.message).not.toBe("");
  }
}

/** A text with a few characters replaced, taken out or doubled. */
const damaged = (text: string): fc.Arbitrary<string> =>
  fc.array(fc.tuple(fc.nat(Math.max(0, text.length - 1)), fc.constantFrom("", "0", "::", "%", "é", "A".repeat(40), "\u0000")), { minLength: 1, maxLength: 4 }).map((changes) =>
    changes.reduce((now, [at, by]) => now.slice(0, at) + by + now.slice(at + 1), text),
  );

const text = fc.string({ unit: "grapheme", maxLength: 3000 });

describe("a link's fragment", () => {
  it("brings any text back", () => {
    fc.assert(fc.property(text, (before) => void expect(unpack(fromAddress(toAddress(pack(before))))).toBe(before)), how);
  }, timeout);
  it("is read or refused, whatever it is", () => {
    fc.assert(fc.property(fc.string(), (any) => readOrRefused(() => unpack(fromAddress(any)))), how);
    fc.assert(fc.property(fc.uint8Array({ maxLength: 400 }), (any) => readOrRefused(() => unpack(any))), how);
    const good = toAddress(pack("Γ = 0.62 MeV ± 3 %, ".repeat(30)));
    fc.assert(fc.property(damaged(good), (any) => readOrRefused(() => unpack(fromAddress(any)))), how);
  }, timeout);
});

describe("a QR code's payload", () => {
  it("is Base45 that brings any bytes back", () => {
    fc.assert(fc.property(fc.uint8Array({ maxLength: 600 }), (before) => void expect(decode45(encode45(before))).toEqual(before)), how);
  }, timeout);
  it("is read or refused, whatever it is", () => {
    fc.assert(fc.property(fc.string(), (any) => readOrRefused(() => collect(null, any))), how);
    fc.assert(fc.property(fc.string(), (any) => readOrRefused(() => decode45(any))), how);
  }, timeout);
  it("gives the sheet back from codes in any order, or says that they do not fit", () => {
    const noise = fc.uint8Array({ minLength: 500, maxLength: 2500 }).map((bytes) => String.fromCharCode(...bytes.map((byte) => 33 + (byte % 90))));
    const shuffled = noise.chain((before) => fc.shuffledSubarray(seriesOf(before), { minLength: seriesOf(before).length }).map((codes) => ({ before, codes })));
    const put = (codes: readonly string[]): Collected | null => codes.reduce<Collected | null>((got, code) => collect(got, code), null);
    fc.assert(
      fc.property(shuffled, ({ before, codes }) => {
        const got = put(codes);
        expect(got && missing(got)).toEqual([]);
        expect(got && textOf(got)).toBe(before);
      }),
      how,
    );
    const spoiled = shuffled.chain(({ codes }) => damaged(codes[0] ?? "").map((first) => [first, ...codes.slice(1)]));
    fc.assert(
      fc.property(spoiled, (codes) =>
        readOrRefused(() => {
          const got = put(codes);
          if (got !== null && missing(got).length === 0) textOf(got);
        }),
      ),
      how,
    );
  }, timeout);
});
