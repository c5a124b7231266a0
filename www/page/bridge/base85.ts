// Bytes in the text of the page: 4 bytes in 5 characters that HTML, script and UTF-8 leave alone.
// A fifth smaller overhead than Base64, which counts in a file with a budget. build.mjs writes it.

/** The 85 digits, in order. */
export const DIGITS = "0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz!#$%()*+,-.:;=?@[]^_{|}";

/** The bytes of a text; the last group of n+1 characters holds n bytes. */
export function decode85(text: string): Uint8Array<ArrayBuffer> {
  const values = new Uint8Array(128).fill(255);
  for (let digit = 0; digit < DIGITS.length; digit += 1) values[DIGITS.charCodeAt(digit)] = digit;
  const out = new Uint8Array(Math.floor((text.length * 4) / 5));
  let at = 0;
  for (let start = 0; start < text.length; start += 5) {
    const length = Math.min(5, text.length - start);
    let value = 0;
    // Characters that are missing at the end count as the largest digit.
    for (let k = 0; k < 5; k += 1) {
      const digit = k < length ? (values[text.charCodeAt(start + k)] ?? 255) : 84;
      if (digit === 255) throw new Error("the page is damaged: its engine cannot be read");
      value = value * 85 + digit;
    }
    for (let k = 0; k < length - 1; k += 1) out[at++] = Math.floor(value / 256 ** (3 - k)) & 255;
  }
  return out.subarray(0, at);
}
