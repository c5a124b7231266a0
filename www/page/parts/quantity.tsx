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

/** Powers written as powers: nb^-1 -> nb⁻¹. */
export function units(text: string): string {
  return text.replace(/\^?(-\d+)|\^(\d+)/g, (_all, minus: string | undefined, plus: string | undefined) =>
    [...(minus ?? plus ?? "")].map((c) => (c === "-" ? "⁻" : ("⁰¹²³⁴⁵⁶⁷⁸⁹"[Number(c)] ?? c))).join(""),
  );
}
