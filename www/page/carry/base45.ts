/** RFC 9285 Base45: bytes in the 45 characters that a QR code packs most densely. */
import { Unreadable } from "./pack";

const ALPHABET = "0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZ $%*+-./:";

/** Bytes as Base45. */
export function encode45(bytes: Uint8Array): string {
  let text = "";
  const digit = (value: number): string => ALPHABET.charAt(value % 45);
  for (let at = 0; at < bytes.length; at += 2) {
    const first = bytes[at] ?? 0;
    const second = bytes[at + 1];
    if (second === undefined) {
      text += digit(first) + digit(Math.floor(first / 45));
      continue;
    }
    const value = first * 256 + second;
    text += digit(value) + digit(Math.floor(value / 45)) + digit(Math.floor(value / 2025));
  }
  return text;
}

/** Base45 as bytes. Throws Unreadable. */
export function decode45(text: string): Uint8Array {
  const values = Array.from(text, (char) => ALPHABET.indexOf(char));
  if (values.includes(-1) || values.length % 3 === 1) throw new Unreadable("it is damaged or cut short");
  const out: number[] = [];
  for (let at = 0; at < values.length; at += 3) {
    const [a = 0, b = 0, c] = values.slice(at, at + 3);
    const value = a + 45 * b + 2025 * (c ?? 0);
    if (value > (c === undefined ? 255 : 65535)) throw new Unreadable("it is damaged or cut short");
    if (c === undefined) out.push(value);
    else out.push(value >> 8, value & 255);
  }
  return Uint8Array.from(out);
}
