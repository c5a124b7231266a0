/** What the desk shows: the scan itself, or the amplitude behind it. */
import type { JSX } from "preact";
import { signal } from "@preact/signals";

export type Stage = "scan" | "amplitude";

/** What is shown now. */
export const stage = signal<Stage>("scan");

const STAGES = [
  ["scan", "Scan"],
  ["amplitude", "Amplitude"],
] as const;

/** The two doors above the axis. */
export function Stages(): JSX.Element {
  return (
    <nav class="stages" aria-label="View">
      {STAGES.map(([key, text]) => (
        <button type="button" key={key} aria-current={stage.value === key ? "page" : undefined} onClick={() => (stage.value = key)}>
          {text}
        </button>
      ))}
    </nav>
  );
}
