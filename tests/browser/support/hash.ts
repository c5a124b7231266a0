// The fingerprint of an answer, as crates/fuzz/src/hash.rs makes it natively: the same where the same
// bits were computed. It is run inside the page, so it is kept as text of a function.

/** Source of a function (reply or refusal) -> fingerprint. */
export const fingerprint = `(answer) => {
  let [first, second] = [0x811c9dc5, 0x12345678];
  const byte = (value) => {
    first = Math.imul(first ^ value, 0x01000193);
    second = Math.imul(second ^ (value ^ 0x5a), 0x01000193);
  };
  const utf8 = new TextEncoder();
  const view = new DataView(new ArrayBuffer(8));
  const bytes = (kind, list) => {
    byte(kind.charCodeAt(0));
    for (const value of list) byte(value);
  };
  const number = (value) => {
    if (!Number.isFinite(value)) return byte(48);
    view.setFloat64(0, value, true);
    bytes("n", new Uint8Array(view.buffer));
  };
  const walk = (value) => {
    if (value === null || value === undefined) byte(48);
    else if (typeof value === "boolean") byte(value ? 116 : 102);
    else if (typeof value === "number" || typeof value === "bigint") number(Number(value));
    else if (typeof value === "string") {
      bytes("s", utf8.encode(value));
      byte(46);
    } else if (Array.isArray(value)) {
      byte(91);
      value.forEach(walk);
      byte(93);
    } else {
      byte(123);
      // In the order of the bytes of their names, as Rust sorts them; ours are ASCII.
      for (const key of Object.keys(value).sort()) {
        const inner = value[key];
        if (inner === null || inner === undefined || (typeof inner === "number" && !Number.isFinite(inner))) continue;
        bytes("k", utf8.encode(key));
        walk(inner);
      }
      byte(125);
    }
  };
  if (answer.columns) {
    walk(answer.body);
    for (const column of answer.columns) {
      walk([column.name, column.unit]);
      for (const value of column.values) number(value);
    }
  } else walk(answer);
  const hex = (value) => (value >>> 0).toString(16).padStart(8, "0");
  return hex(first) + hex(second);
}`;
