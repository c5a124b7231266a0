/** Files, clipboard and links: everything that leaves the page or comes in does so by a person's hand. */
import { Refused } from "../bridge/failures";
import { fromAddress, pack, toAddress, unpack } from "../carry/pack";
import { savedFile } from "./saved";
import { open, sheet } from "./sheet";
import type { Sheet, Table } from "./types";
import { ask } from "./work";

/** Gives a file to the person; the name keeps to letters that every system takes. */
export function download(name: string, content: Blob): void {
  const url = URL.createObjectURL(content);
  const link = document.createElement("a");
  link.href = url;
  link.download = name;
  link.click();
  setTimeout(() => URL.revokeObjectURL(url), 10_000);
}

/** Name of a file of this sheet. */
export function fileName(what: string, ending: string): string {
  const title = sheet.peek().title.normalize("NFKD").replace(/[^\w-]+/g, "-").replace(/^-+|-+$/g, "").slice(0, 40) || "scan";
  return `${title.toLowerCase()}${what === "" ? "" : `-${what}`}.${ending}`;
}

/** Saves the sheet as a file. */
export function saveSheet(): void {
  const name = fileName("", "json");
  download(name, new Blob([`${JSON.stringify(sheet.peek(), null, 1)}\n`], { type: "application/json" }));
  savedFile.value = { name, at: Date.now() };
}

/** Opens a sheet from text; returns what is wrong, or "". Nothing changes if something is. */
export async function openText(text: string, did: string): Promise<string> {
  try {
    const { body } = await ask({ kind: "open", text });
    if (body.kind !== "sheet") return "This is not a scan sheet.";
    open(body.sheet, did);
    return "";
  } catch (reason) {
    return reason instanceof Refused ? reason.refusal.message : String(reason);
  }
}

/** A table as CSV, or the lines for an electronic log. */
export async function tableText(table: Table): Promise<string> {
  const { body } = await ask({ kind: "write_table", sheet: sheet.peek(), table });
  return body.kind === "text" ? body.text : "";
}

/** Columns as CSV (RFC 4180), units in the headers; where nothing is, the cell is empty. */
export function csvOf(columns: readonly { name: string; unit: string; values: ArrayLike<number> }[]): string {
  const quoted = (text: string): string => (/[",\r\n]/.test(text) ? `"${text.replace(/"/g, '""')}"` : text);
  const lines = [columns.map((column) => quoted(column.unit === "" ? column.name : `${column.name} (${column.unit})`)).join(",")];
  for (let i = 0; i < (columns[0]?.values.length ?? 0); i += 1) {
    lines.push(columns.map(({ values }) => (Number.isFinite(values[i]) ? String(values[i]) : "")).join(","));
  }
  return `${lines.join("\r\n")}\r\n`;
}

/** A link that carries the sheet in its fragment; nothing of it is sent anywhere. */
export function linkOf(now: Sheet): string {
  return `${location.href.split("#")[0]}#sheet=${toAddress(pack(JSON.stringify(now)))}`;
}

/** Text of the sheet in the page's own address, or `null` if there is none. Throws Unreadable. */
export function sheetInLink(hash: string): string | null {
  const text = /^#sheet=(.+)$/.exec(hash)?.[1];
  return text === undefined ? null : unpack(fromAddress(text));
}

/** Puts text on the clipboard; `false` where the browser does not allow it. */
export async function copy(text: string): Promise<boolean> {
  try {
    await navigator.clipboard.writeText(text);
    return true;
  } catch {
    const box = document.createElement("textarea");
    box.value = text;
    box.className = "unseen";
    document.body.append(box);
    box.select();
    const done = document.execCommand("copy");
    box.remove();
    return done;
  }
}
