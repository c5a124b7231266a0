/** A symbol of physics: "φ_bg" as φ with a lowered bg. */
import type { JSX } from "preact";

/** The symbol; what follows an underscore is set low, up to the next dot. */
export function Sym({ text }: { text: string }): JSX.Element {
  return (
    <span class="sym">
      {text.split(/(_[^·_\s]+)/).map((part) => (part.startsWith("_") ? <sub>{part.slice(1)}</sub> : part))}
    </span>
  );
}
