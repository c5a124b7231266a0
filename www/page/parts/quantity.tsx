/** Typed text of a quantity, its unit set back so that the digits stand out. */
import type { JSX } from "preact";

const PARTS = /^\s*([+\-−]?[\d.,]+(?:[eE][+\-]?\d+)?(?:\([\d.]+\))?)\s*(.*)$/s;

/** "2874.20 MeV" with a quiet unit. */
export function Quantity({ text }: { text: string }): JSX.Element {
  const match = PARTS.exec(text);
  if (match === null) return <>{text}</>;
  return (
    <>
      {match[1]}
      {match[2] && <span class="unit"> {units(match[2])}</span>}
    </>
  );
}

/** Powers written as powers: nb^-1 -> nb⁻¹. Only after a unit's letters: "-130 deg" and "3.5e-4" stay as they are. */
export function units(text: string): string {
  return text.replace(/\b([a-zA-Zµ]{1,3})(?:\^(-?\d+)|(-\d+))/g, (_all, unit: string, power: string | undefined, bare: string | undefined) => {
    const marks = [...(power ?? bare ?? "")].map((c) => (c === "-" ? "⁻" : ("⁰¹²³⁴⁵⁶⁷⁸⁹"[Number(c)] ?? c)));
    return unit + marks.join("");
  });
}
