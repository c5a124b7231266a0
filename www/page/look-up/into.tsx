/** A looked-up number put into the sheet: chosen from the fields that take one of its kind. */
import type { JSX } from "preact";
import { addRow } from "../state/rows";
import { runningIndex, setField, sheet } from "../state/sheet";
import type { Sheet } from "../state/types";
import { cursor } from "../state/view";

/** Where a number can go: words, and what is done. */
interface Place {
  words: string;
  put: (text: string, value: number) => void;
}

function field(path: string, words: string): Place {
  return { words, put: (text) => setField(path, text, words) };
}

/** Kinds of number, by the unit in which the worker gives them. */
const PLACES: Record<string, (sheet: Sheet) => Place[]> = {
  GeV: (now) => [
    { words: "Cursor", put: (_text, value) => (cursor.value = value) },
    ...now.model.resonances.flatMap((resonance, i) => [
      field(`model.resonances[${i}].mass`, `Mass of ${resonance.name}`),
      field(`model.resonances[${i}].width`, `Width of ${resonance.name}`),
    ]),
    field("plan.from", "Plan: W from"),
    field("plan.to", "Plan: W to"),
    field("plan.off_below", "Plan: off is below"),
    field("plan.off_above", "Plan: off is above"),
    field("model.radiation.w_min", "Least W left after radiation"),
  ],
  nb: () => [field("detection.background_cross_section", "Background cross section")],
  "nb^-1": () => (runningIndex.peek() < 0 ? [] : [field(`data.rows[${runningIndex.peek()}].luminosity`, "Luminosity of the running point")]),
  "1/h": () => [field("detection.background_rate", "Background rate")],
  h: () => [field("plan.hours", "Plan: hours on the clock"), field("plan.least_dwell", "Plan: dwell at least")],
};

interface IntoProps {
  text: string;
  value: number;
  unit: string;
  /** The number is a setting of the kind that the dial shows. */
  dial?: boolean;
  told: (words: string) => void;
}

/** The choice, or nothing where no field takes such a number. */
export function Into({ text, value, unit, dial, told }: IntoProps): JSX.Element | null {
  const places: Place[] = [
    ...(dial ? [{ words: "Start a point here", put: () => void addRow({ setting: text }, true) }] : []),
    ...(PLACES[unit]?.(sheet.value) ?? []).filter((place) => place.words !== "Cursor" || value > 0),
  ];
  if (places.length === 0) return null;
  return (
    <Choose
      name={`Use ${text} as`}
      words={places.map((place) => place.words)}
      onChoose={(index) => {
        const place = places[index];
        place?.put(text, value);
        told(`${place?.words ?? ""}: ${text}. Undo takes it back.`);
      }}
    />
  );
}

/** A list that acts at once and goes back to its name. */
export function Choose(props: { name: string; words: readonly string[]; onChoose: (index: number) => void }): JSX.Element {
  return (
    <select
      class="use"
      aria-label={props.name}
      value=""
      onChange={(event) => {
        const { value } = event.currentTarget;
        event.currentTarget.value = "";
        if (value !== "") props.onChoose(Number(value));
      }}
    >
      <option value="">Use</option>
      {props.words.map((words, i) => (
        <option key={words} value={i}>
          {words}
        </option>
      ))}
    </select>
  );
}
