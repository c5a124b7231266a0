/**
 * A sheet as a numbered series of QR codes, and back.
 *
 * One code reads `WIDTHWISE:1:K/N:SUM:DATA`: version of this layout, number of the code and how many there are,
 * checksum of the whole (so that codes of two sheets are never mixed), and its piece of the packed sheet in Base45.
 */
import { decode45, encode45 } from "./base45";
import { pack, unpack, Unreadable } from "./pack";

const MARK = "WIDTHWISE";
const LAYOUT = "1";
/** Bytes in one code: version 20 at 15 % correction, still read off a screen by a telephone held in the hand. */
const BYTES_A_CODE = 560;
/** More codes than this are not carried by hand: a file is. */
export const MOST_CODES = 40;

/** The texts of the codes. Throws Unreadable if the sheet is too long for a series. */
export function seriesOf(text: string): string[] {
  const bytes = pack(text);
  const count = Math.max(1, Math.ceil(bytes.length / BYTES_A_CODE));
  if (count > MOST_CODES) {
    throw new Unreadable(`this sheet needs ${count} codes; more than ${MOST_CODES} are not practical: save it to a file instead`);
  }
  // Pieces of even size (Base45 takes bytes in pairs), all but the last equally long.
  const size = 2 * Math.ceil(bytes.length / count / 2);
  const sum = checksum(bytes);
  return Array.from({ length: count }, (_, index) =>
    [MARK, LAYOUT, `${index + 1}/${count}`, sum, encode45(bytes.subarray(index * size, (index + 1) * size))].join(":"),
  );
}

/** Codes read so far, in any order. */
export interface Collected {
  sum: string;
  count: number;
  /** Piece k-1, or null while it is missing. */
  pieces: readonly (string | null)[];
}

/** Adds what a camera has read. Throws Unreadable for a code that is none of ours. */
export function collect(before: Collected | null, code: string): Collected {
  const match = /^WIDTHWISE:(\w+):(\d{1,3})\/(\d{1,3}):([0-9A-F]{8}):(.*)$/s.exec(code);
  if (match === null) throw new Unreadable("this code does not carry a scan sheet");
  const [, layout = "", number = "", of = "", sum = "", data = ""] = match;
  if (layout !== LAYOUT) throw new Unreadable(`this code was made by a newer version of this page (layout ${layout})`);
  const [index, count] = [Number(number) - 1, Number(of)];
  if (count < 1 || count > MOST_CODES || index < 0 || index >= count) throw new Unreadable("this code is damaged");
  // A code of another sheet begins a new collection.
  const same = before !== null && before.sum === sum && before.count === count;
  const pieces = same ? [...before.pieces] : Array.from({ length: count }, () => null);
  pieces[index] = data;
  return { sum, count, pieces };
}

/** Numbers of the codes still to be read. */
export function missing({ pieces }: Collected): number[] {
  return pieces.flatMap((piece, index) => (piece === null ? [index + 1] : []));
}

/** The sheet's text once all codes are there. Throws Unreadable. */
export function textOf({ sum, pieces }: Collected): string {
  const parts = pieces.map((piece) => decode45(piece ?? ""));
  const bytes = new Uint8Array(parts.reduce((length, part) => length + part.length, 0));
  let at = 0;
  for (const part of parts) {
    bytes.set(part, at);
    at += part.length;
  }
  if (checksum(bytes) !== sum) throw new Unreadable("the codes do not fit together: read them again");
  return unpack(bytes);
}

/** CRC-32 (ISO 3309, reversed polynomial 0xEDB88320) in eight hexadecimal digits. */
export function checksum(bytes: Uint8Array): string {
  let rest = 0xffffffff;
  for (const byte of bytes) {
    rest ^= byte;
    for (let bit = 0; bit < 8; bit += 1) rest = rest & 1 ? (rest >>> 1) ^ 0xedb88320 : rest >>> 1;
  }
  return ((rest ^ 0xffffffff) >>> 0).toString(16).toUpperCase().padStart(8, "0");
}
