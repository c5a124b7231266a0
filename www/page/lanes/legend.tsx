/** The legend is the switchboard: each entry shows its line as drawn and turns it on or off. */
import type { JSX } from "preact";
import { computing } from "../state/answers";
import { traces } from "../state/prefs";
import { partStyles, STAGES, type TraceStyle } from "./line-shape";

/** Entries of the line-shape lane. */
export function Legend(): JSX.Element {
  const on = traces.value;
  const parts = partStyles();
  return (
    <ul class="legend" aria-label="Curves">
      {STAGES.map((style) => (
        <li key={style.key}>
          <Entry style={style} on={on[style.key] === true} toggle={style.key} />
        </li>
      ))}
      {parts.length > 0 && (
        <li>
          <button
            type="button"
            class="chip"
            aria-pressed={on["parts"] === true}
            onClick={() => (traces.value = { ...on, parts: on["parts"] !== true })}
          >
            Contributions
          </button>
        </li>
      )}
      {on["parts"] === true &&
        parts.map((style) => (
          <li key={style.key} class="legend-part">
            <Sample style={style} /> {style.label}
          </li>
        ))}
      <li>
        <span class="note" role="status">
          {computing.value ? "Computing…" : ""}
        </span>
      </li>
    </ul>
  );
}

function Entry({ style, on, toggle }: { style: TraceStyle; on: boolean; toggle: string }): JSX.Element {
  return (
    <button
      type="button"
      class="chip"
      aria-pressed={on}
      onClick={() => (traces.value = { ...traces.value, [toggle]: !on })}
    >
      <Sample style={style} />
      {style.label}
    </button>
  );
}

function Sample({ style }: { style: TraceStyle }): JSX.Element {
  return (
    <svg class="sample" viewBox="0 0 28 8" aria-hidden="true">
      <line
        x1="0"
        y1="4"
        x2="28"
        y2="4"
        stroke={`var(${style.colour})`}
        stroke-width={style.width}
        stroke-dasharray={style.dash.join(" ")}
      />
    </svg>
  );
}
