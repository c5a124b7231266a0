/** Columns of the table: the ones everybody needs, and those that some row uses. */
import type { Row } from "../state/types";
import type { TextField } from "../state/rows";

/** One column of typed text. */
export interface ColumnView {
  field: TextField;
  title: string;
  number: boolean;
  /** Width in characters. */
  width: number;
}

const COLUMNS: readonly (ColumnView & { always?: boolean; rare?: boolean })[] = [
  { field: "id", title: "Point", number: false, width: 4, always: true },
  { field: "group", title: "Fill", number: false, width: 5 },
  { field: "setting", always: true, title: "Dial", number: true, width: 13 },
  { field: "w", title: "W", number: true, width: 12 },
  { field: "w_error", rare: true, title: "Error of W", number: true, width: 7 },
  { field: "sigma_w", title: "σ of W", number: true, width: 8 },
  { field: "luminosity", title: "Luminosity", number: true, width: 11 },
  { field: "luminosity_error", rare: true, title: "its error", number: true, width: 9 },
  { field: "live_time", rare: true, title: "Live time", number: true, width: 5 },
  { field: "live_fraction", title: "Live", number: true, width: 7 },
  { field: "efficiency", title: "Efficiency", number: true, width: 8 },
  { field: "efficiency_error", title: "its error", number: true, width: 7 },
  { field: "counts", title: "Counts", number: true, width: 6 },
  { field: "off_counts", title: "Off region", number: true, width: 8 },
  { field: "tau", title: "τ", number: true, width: 5 },
  { field: "cross_section", title: "Cross section", number: true, width: 12 },
  { field: "cross_section_error", title: "its error", number: true, width: 10 },
  { field: "channel", title: "Channel", number: false, width: 9 },
  { field: "start", rare: true, title: "Start", number: false, width: 24 },
  { field: "stop", rare: true, title: "Stop", number: false, width: 24 },
  { field: "comment", title: "Comment", number: false, width: 18, always: true },
];

/** The columns that a table of these rows shows; with `all` also those that are used but seldom looked at. */
export function columnsOf(rows: readonly Row[], all: boolean): ColumnView[] {
  const used = new Set<string>();
  for (const row of rows) for (const [key, value] of Object.entries(row)) if (value !== "" && value !== null) used.add(key);
  const measured = used.has("cross_section") ? ["cross_section", "cross_section_error"] : ["counts", "luminosity"];
  return COLUMNS.filter(
    (column) => column.always === true || measured.includes(column.field) || (used.has(column.field) && (all || column.rare !== true)),
  );
}
