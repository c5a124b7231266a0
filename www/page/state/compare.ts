/** A second sheet beside the one that is open: its curve over the same axis, and what differs. */
import { effect, signal } from "@preact/signals";
import { Refused } from "../bridge/failures";
import { Line } from "./line";
import type { Reply } from "../../shared/protocol";
import type { Request, Sheet } from "./types";
import { view } from "./view";
import { ask } from "./work";

/** The other sheet and what to call it. */
export const compared = signal<{ sheet: Sheet; name: string } | null>(null);
/** Its observed curve on the energies of the view; `null`: none. */
export const comparedCurve = signal<{ w: Float64Array; observed: Float64Array } | null>(null);

/** One field in which two sheets differ. */
export interface Difference {
  path: string;
  here: string;
  there: string;
}

/** Every field that differs, in the order of the document; the first so many. */
export function differences(here: unknown, there: unknown, most = 60): Difference[] {
  const found: Difference[] = [];
  walk(here, there, "", found, most);
  return found;
}

function walk(here: unknown, there: unknown, path: string, found: Difference[], most: number): void {
  if (found.length >= most || here === there) return;
  if (isTree(here) && isTree(there)) {
    const list = Array.isArray(here) || Array.isArray(there);
    for (const key of new Set([...Object.keys(here), ...Object.keys(there)])) {
      const step = list ? `${path}[${key}]` : path === "" ? key : `${path}.${key}`;
      walk(here[key], there[key], step, found, most);
    }
    return;
  }
  const [a, b] = [shown(here), shown(there)];
  if (a !== b) found.push({ path, here: a, there: b });
}

function isTree(value: unknown): value is Record<string, unknown> {
  return value !== null && typeof value === "object";
}

function shown(value: unknown): string {
  if (value === undefined || value === null || value === false) return "";
  if (Array.isArray(value)) return `${value.length} entries`;
  return typeof value === "object" ? "given" : String(value);
}

/** Energies of the other curve. */
const POINTS = 400;

/** Keeps the other curve up to date with the axis; returns what stops it. */
export function keepComparing(): () => void {
  const line = new Line<Request, Reply>({ ask }, []);
  return effect(() => {
    const other = compared.value;
    const { from, to } = view.value;
    if (other === null) {
      comparedCurve.value = null;
      return;
    }
    line.put(
      "curve",
      { kind: "curve", sheet: other.sheet, from_gev: from, to_gev: to, points: POINTS },
      ({ columns }) => {
        const observed = columns.find((column) => column.name.toLowerCase() === "observed");
        const w = columns[0];
        comparedCurve.value = w && observed && compared.peek() !== null ? { w: w.values, observed: observed.values } : null;
      },
      (reason) => {
        if (reason instanceof Refused) comparedCurve.value = null;
      },
    );
  });
}
