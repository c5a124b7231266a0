/** Rows of data: what is done to them, each as one step that can be undone. */
import { typed, unitOf } from "../format/typed";
import { change, sheet } from "./sheet";
import type { Row, Sheet } from "./types";

/** Fields of a row that hold typed text. */
export type TextField =
  | "id"
  | "start"
  | "stop"
  | "group"
  | "setting"
  | "w"
  | "w_error"
  | "sigma_w"
  | "luminosity"
  | "luminosity_error"
  | "live_fraction"
  | "live_time"
  | "counts"
  | "off_counts"
  | "tau"
  | "efficiency"
  | "efficiency_error"
  | "channel"
  | "cross_section"
  | "cross_section_error"
  | "comment";

/** Changes one row. */
export function changeRow(index: number, did: string, recipe: (row: Row) => Row, key = ""): void {
  change(did, (before) => withRows(before, before.data.rows.map((row, i) => (i === index ? recipe(row) : row))), key);
}

/** Sets one cell as typed; empty text takes the field away. */
export function setCell(index: number, field: TextField, text: string): void {
  const id = sheet.peek().data.rows[index]?.id ?? "";
  changeRow(
    index,
    `${field.replace(/_/g, " ")} of ${id}`,
    (row) => {
      const next: Row = { ...row };
      if (field === "id" || field === "comment") next[field] = text;
      else if (text.trim() === "") delete next[field];
      else next[field] = text;
      return next;
    },
    `rows ${index} ${field}`,
  );
}

/** Leaves a row out of the fit, or takes it back. */
export function toggleUse(index: number): void {
  const row = sheet.peek().data.rows[index];
  if (row === undefined) return;
  changeRow(index, row.left_out ? `use ${row.id} again` : `leave out ${row.id}`, (old) => ({ ...old, left_out: !old.left_out }));
}

/** Flags one row as running now (and no other), or as finished. */
export function toggleRunning(index: number): void {
  const row = sheet.peek().data.rows[index];
  if (row === undefined) return;
  const on = !row.running;
  change(on ? `${row.id} is running` : `${row.id} is finished`, (before) =>
    withRows(
      before,
      before.data.rows.map((other, i) => (i === index ? { ...other, running: on } : other.running ? { ...other, running: false } : other)),
    ),
  );
}

/** Swaps online and final luminosity of a row. */
export function swapLuminosity(index: number): void {
  const row = sheet.peek().data.rows[index];
  if (!row?.other_luminosity) return;
  changeRow(index, `swap the luminosity of ${row.id}`, (old) => ({
    ...old,
    luminosity: old.other_luminosity ?? null,
    other_luminosity: old.luminosity ?? null,
    luminosity_source: old.luminosity_source === "online" ? "final" : "online",
  }));
}

/** Takes a row away. */
export function removeRow(index: number): void {
  const id = sheet.peek().data.rows[index]?.id ?? "";
  change(`remove ${id}`, (before) => withRows(before, before.data.rows.filter((_, i) => i !== index)));
}

/** A new row at the end, with an id that no other row has; `running` makes it the running one; `also` is part of the same step. */
export function addRow(content: Partial<Row>, running: boolean, also: (sheet: Sheet) => Sheet = (same) => same): string {
  const rows = sheet.peek().data.rows;
  const id = freshId(rows);
  const row: Row = { ...content, id, ...(running ? { running: true, start: nowWithZone() } : {}) };
  change(running ? `start ${id}` : `add ${id}`, (before) =>
    withRows(also(before), [...before.data.rows.map((other) => (running && other.running ? { ...other, running: false } : other)), row]),
  );
  return id;
}

/** Closes the running row now. */
export function closeRow(index: number, comment: string): void {
  const id = sheet.peek().data.rows[index]?.id ?? "";
  changeRow(index, `close ${id}`, (row) => ({
    ...row,
    running: false,
    stop: row.stop ?? stopNow(row.start),
    ...(comment.trim() === "" ? {} : { comment: row.comment ? `${row.comment}; ${comment.trim()}` : comment.trim() }),
  }));
}

/** This moment, and no sooner than a second after the start: the sheet counts whole seconds. */
function stopNow(start: string | null | undefined): string {
  const begun = Date.parse(start ?? "");
  return nowWithZone(new Date(Number.isNaN(begun) ? Date.now() : Math.max(Date.now(), begun + 1000)));
}

/** A bare number gets the unit that the column has had so far; anything else stays as typed. */
export function withUnit(text: string, unit: string): string {
  const parts = typed(text.trim());
  return parts !== null && parts.rest.trim() === "" && unit !== "" ? `${text.trim()} ${unit}` : text.trim();
}

/** The text without its unit where that is the one shown beside the field. */
export function withoutUnit(text: string, unit: string): string {
  return unitOf(text) === unit ? text.slice(0, text.length - unit.length).trim() : text;
}

/** The unit that a column has had so far. */
export function columnUnit(field: "luminosity" | "setting" | "w"): string {
  const rows = sheet.peek().data.rows;
  for (let i = rows.length - 1; i >= 0; i -= 1) {
    const unit = unitOf(rows[i]?.[field] ?? "");
    if (unit !== "") return unit;
  }
  return field === "luminosity" ? "nb^-1" : "MeV";
}

/** This moment with the zone of this machine: 2026-12-01T02:10:00+01:00. */
export function nowWithZone(at = new Date()): string {
  const zone = -at.getTimezoneOffset();
  const two = (value: number): string => String(Math.trunc(Math.abs(value))).padStart(2, "0");
  const local = new Date(at.getTime() + zone * 60_000).toISOString().slice(0, 19);
  return `${local}${zone < 0 ? "-" : "+"}${two(zone / 60)}:${two(zone % 60)}`;
}

function freshId(rows: readonly Row[]): string {
  const used = new Set(rows.map((row) => row.id));
  for (let i = rows.length + 1; ; i += 1) if (!used.has(`P${i}`)) return `P${i}`;
}

function withRows(before: Sheet, rows: Row[]): Sheet {
  return { ...before, data: { ...before.data, rows } };
}
