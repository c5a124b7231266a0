/** A text made small, and back: raw deflate. What comes in is not trusted: it may not unpack to more than a sheet can be. */
import { deflateSync, Inflate, strFromU8, strToU8 } from "fflate";

/** No sheet is longer than this; a packed bomb is stopped there. */
export const MOST_BYTES = 8_000_000;

/** Why a carried text could not be read, in words for the person who holds it. */
export class Unreadable extends Error {
  override name = "Unreadable";
}

/** The text as few bytes. */
export function pack(text: string): Uint8Array {
  return deflateSync(strToU8(text), { level: 9 });
}

/** The text again. Throws Unreadable. */
export function unpack(bytes: Uint8Array): string {
  const parts: Uint8Array[] = [];
  let length = 0;
  let whole = false;
  const inflate = new Inflate((part, last) => {
    length += part.length;
    if (length > MOST_BYTES) throw new Unreadable(`it holds more than ${MOST_BYTES / 1e6} MB`);
    parts.push(part);
    whole = last;
  });
  try {
    // In small pieces, so that the limit is met before memory is gone.
    for (let at = 0; at < bytes.length; at += 4096) {
      const end = Math.min(at + 4096, bytes.length);
      inflate.push(bytes.subarray(at, end), end === bytes.length);
    }
  } catch (reason) {
    if (reason instanceof Unreadable) throw reason;
    throw new Unreadable("it is damaged or cut short");
  }
  if (!whole) throw new Unreadable("it is damaged or cut short");
  const out = new Uint8Array(length);
  let at = 0;
  for (const part of parts) {
    out.set(part, at);
    at += part.length;
  }
  return strFromU8(out);
}

/** Bytes as text for an address (RFC 4648 base64url, no padding). */
export function toAddress(bytes: Uint8Array): string {
  let text = "";
  for (let at = 0; at < bytes.length; at += 8192) text += String.fromCharCode(...bytes.subarray(at, at + 8192));
  return btoa(text).replace(/\+/g, "-").replace(/\//g, "_").replace(/=+$/, "");
}

/** Bytes out of an address. Throws Unreadable. */
export function fromAddress(text: string): Uint8Array {
  try {
    return Uint8Array.from(atob(text.replace(/-/g, "+").replace(/_/g, "/")), (char) => char.charCodeAt(0));
  } catch {
    throw new Unreadable("it is damaged or cut short");
  }
}
