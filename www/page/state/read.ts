/** Puts a reply of the worker into the page's signals. */
import { batch } from "@preact/signals";
import type { Reply } from "../../shared/protocol";
import * as answers from "./answers";
import { typed } from "../format/typed";
import { symbolOf } from "./parameters";
import type { Sheet } from "./types";
import { placed, usual, whole, type Range } from "./view";

/** A curve: the first column is W. */
export function readCurve({ body, columns }: Reply): void {
  const [w, ...rest] = columns;
  if (body.kind !== "curve" || w === undefined) return;
  answers.curve.value = { w: w.values, columns: rest, accuracy: body.accuracy };
}

/** Everything at the cursor. */
export function readCursor({ body }: Reply): void {
  if (body.kind !== "cursor") return;
  answers.atCursor.value = { w: body.w_gev, dial: body.dial, values: body.values };
}

/** Every row of data; also the range that the axis shows when it shows everything. */
export function readPoints({ body }: Reply, sheet: Sheet): void {
  if (body.kind !== "points") return;
  const rows = new Map(sheet.data.rows.map((row) => [row.id, row]));
  const read: answers.PointView[] = [];
  const unread = new Set<string>();
  for (const point of body.points) {
    const row = rows.get(point.id);
    if (row === undefined) continue;
    if (point.w_gev === null || point.w_gev === undefined) {
      unread.add(point.id);
      continue;
    }
    read.push({
      id: point.id,
      w: point.w_gev,
      wError: point.w_error_gev,
      dial: point.dial,
      used: row.left_out !== true,
      running: row.running === true,
      sigma: finite(point.sigma_nb),
      sigmaError: point.sigma_error_nb,
      luminosity: point.luminosity_nbinv ?? 0,
      time: point.live_time_h ?? 0,
      expected: finite(point.expected),
      seen: finite(point.seen),
      pull: finite(point.pull),
      p: finite(point.p_value),
    });
  }
  batch(() => {
    answers.points.value = read;
    if (unread.size > 0 || answers.unread.peek().size > 0) answers.unread.value = unread;
    place(sheet, read);
  });
}

/** The rows could not be understood at all: the points go, the axis keeps to the hypothesis. */
export function readNoPoints(sheet: Sheet): void {
  batch(() => {
    answers.points.value = [];
    if (!placed.peek()) place(sheet, []);
  });
}

function place(sheet: Sheet, read: readonly answers.PointView[]): void {
  const energies = energiesOf(sheet, read);
  if (energies.length === 0) return;
  put(whole, withRoom(energies));
  put(usual, withRoom(withoutStragglers(energies)));
}

/** A fit, and the one before it for comparison. */
export function readFit({ body }: Reply, sheet: Sheet): void {
  if (body.kind !== "fit") return;
  const parameters = body.parameters.map((parameter) => ({
    id: parameter.id,
    name: parameter.name,
    symbol: symbolOf(parameter.id, sheet),
    value: parameter.value,
    error: parameter.error ?? null,
    unit: parameter.unit,
    atLimit: parameter.at_limit,
  }));
  const fitKey = JSON.stringify([sheet.title, sheet.model.resonances.length, parameters.map(({ id, unit }) => [id, unit])]);
  batch(() => {
    const last = answers.fit.peek();
    // Only the same fit of the same sheet can have moved.
    if (last?.fitKey !== fitKey) answers.fitBefore.value = null;
    else if (last.dataKey !== sheet.data) answers.fitBefore.value = last;
    answers.fit.value = {
      parameters,
      dataKey: sheet.data,
      fitKey,
      correlation: body.correlation,
      statistic: body.statistic,
      degrees: body.degrees_of_freedom,
      p: body.p_value ?? null,
      pHolds: body.p_value_asymptotic,
      why: body.stopped,
      converged: body.converged,
      pulls: body.pulls,
      nuisances: body.nuisances,
      texts: Object.fromEntries(body.parameters.map((parameter) => [parameter.field, parameter.text])),
      warnings: body.warnings,
    };
  });
}

/** A number that can be drawn, or nothing. */
function finite(value: number | null | undefined): number | null {
  return value === null || value === undefined || !Number.isFinite(value) ? null : value;
}

/** Room on both sides of what there is to see, as a share of it. */
const ROOM = 0.06;
/** A point further off than this many times the length of all the others stands on its own. */
const ALONE = 1.2;

/** Every point's energy; without two of them, a few widths of each resonance. */
function energiesOf(sheet: Sheet, read: readonly answers.PointView[]): number[] {
  const energies = read.map((point) => point.w).sort((a, b) => a - b);
  if (energies.length >= 2 && energies[0] !== energies.at(-1)) return energies;
  for (const { mass: typedMass, width: typedWidth } of states(sheet)) {
    const mass = gev(typedMass);
    const width = gev(typedWidth ?? "") ?? 0.05 * (mass ?? 0);
    if (mass === null) continue;
    const reach = Math.max(8 * width, 1.5e-3 * mass);
    energies.push(mass - reach, mass + reach);
  }
  return energies.sort((a, b) => a - b);
}

/** Masses and widths of what the hypothesis is made of. */
function states(sheet: Sheet): readonly { mass: string; width?: string | null | undefined }[] {
  const { hypothesis, diagrams, k_matrix, resonances } = sheet.model;
  if (hypothesis === "diagrams") return diagrams?.mediators ?? [];
  if (hypothesis === "k_matrix") return k_matrix?.poles.map(({ mass }) => ({ mass })) ?? [];
  return resonances;
}

/** Leaves out one point at each end if it lies far off on its own. */
function withoutStragglers(sorted: readonly number[]): readonly number[] {
  if (sorted.length < 5) return sorted;
  const inner = sorted.slice(1, -1);
  const length = (inner.at(-1) ?? 0) - (inner[0] ?? 0);
  const first = (inner[0] ?? 0) - (sorted[0] ?? 0) > ALONE * length ? 1 : 0;
  const last = (sorted.at(-1) ?? 0) - (inner.at(-1) ?? 0) > ALONE * length ? 1 : 0;
  return sorted.slice(first, sorted.length - last);
}

function withRoom(sorted: readonly number[]): Range {
  const [from = 0, to = 1] = [sorted[0], sorted.at(-1)];
  const room = (to - from) * ROOM;
  return { from: from - room, to: to + room };
}

function put(where: { value: Range; peek(): Range }, range: Range): void {
  const before = where.peek();
  if (range.to > range.from && (range.from !== before.from || range.to !== before.to)) where.value = range;
}

const PER: Record<string, number> = { eV: 1e-9, keV: 1e-6, MeV: 1e-3, GeV: 1, TeV: 1e3 };

/** Only to place the first view; what a number means is decided by the core. */
function gev(text: string): number | null {
  const parts = typed(text);
  const per = PER[parts?.rest.trim().split("/")[0] ?? ""];
  return parts === null || per === undefined ? null : parts.value * per;
}
