// The writing side of page/bridge/base85.ts.
const DIGITS = "0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz!#$%()*+,-.:;=?@[]^_{|}";

/** Bytes as text: 4 bytes in 5 characters, n < 4 bytes at the end in n + 1. */
export function encode85(bytes) {
  let text = "";
  for (let start = 0; start < bytes.length; start += 4) {
    const length = Math.min(4, bytes.length - start);
    let value = 0;
    for (let k = 0; k < 4; k += 1) value = value * 256 + (k < length ? bytes[start + k] : 0);
    let group = "";
    for (let k = 0; k < 5; k += 1) {
      group = DIGITS[value % 85] + group;
      value = Math.floor(value / 85);
    }
    text += group.slice(0, length + 1);
  }
  return text;
}
