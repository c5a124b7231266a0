// Bytes in the text of the page: 4 bytes in 5 characters that HTML, script and UTF-8 leave alone.
// A fifth smaller overhead than Base64, which counts in a file with a budget. build.mjs writes it.

/** The 85 digits, in order. */
export const DIGITS = "0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz!#$%()*+,-.:;=?@[]^_{|}";

/** The bytes of a text; the last group of n+1 characters holds n bytes. */
export function decode85(text: string): Uint8Array<ArrayBuffer> {
  const values = new Uint8Array(256).fill(255);
  for (let digit = 0; digit < DIGITS.length; digit += 1) values[DIGITS.charCodeAt(digit)] = digit;
  // Padded with the largest digit; what it adds at the end is cut off.
  const groups = Math.ceil(text.length / 5);
  const codes = text.padEnd(groups * 5, DIGITS.at(-1));
  const out = new Uint8Array(groups * 4);
  let wrong = 0;
  const digit = (at: number): number => {
    const value = values[codes.charCodeAt(at)] ?? 255;
    wrong |= value & 128;
    return value;
  };
  for (let at = 0, to = 0; to < out.length; at += 5, to += 4) {
    const value = (((digit(at) * 85 + digit(at + 1)) * 85 + digit(at + 2)) * 85 + digit(at + 3)) * 85 + digit(at + 4);
    out[to] = value >>> 24;
    out[to + 1] = value >>> 16;
    out[to + 2] = value >>> 8;
    out[to + 3] = value;
  }
  if (wrong !== 0) throw new Error("the page is damaged: a part of it cannot be read");
  return out.subarray(0, Math.floor((text.length * 4) / 5));
}
