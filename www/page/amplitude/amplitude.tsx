/** The amplitude behind the curve: propagator, poles, angles, diagrams, unitarity. */
import type { JSX } from "preact";
import { useEffect } from "preact/hooks";
import { Choice } from "../parts/field";
import { AmplitudeLanes } from "./lanes";
import { Angles } from "./angles";
import { Argand } from "./argand";
import { Diagrams } from "./drawn";
import { Plane } from "./plane";
import { InOtherWords, Poles, Unitarity } from "./report";
import { axisScale, digits, fixed } from "../format/number";
import { nearestIndex } from "./argand";
import { angular, column, here, line, of, refused, signs, watch } from "./state";

/** Value of a line at the cursor. */
function AtCursor(): JSX.Element | null {
  const answer = line.value;
  const w = column(answer, "W");
  if (w === null) return null;
  const i = nearestIndex(w, here.value);
  const { unit, per } = axisScale(here.value, here.value);
  const told = [
    ["|Δ|²", "|Delta|^2", " GeV⁻⁴"],
    ["|T|²", "|T|^2", ""],
    ["Re Δ", "Re Delta", " GeV⁻²"],
    ["Im Δ", "Im Delta", " GeV⁻²"],
    ["phase", "phase", "°"],
  ] as const;
  return (
    <p class="at-cursor" role="status" aria-live="off">
      <span class="sym">W</span> = {fixed(here.value / per, 3)} {unit}
      {told.map(([name, key, of]) => {
        const values = column(answer, key);
        return values === null ? null : (
          <span key={key}>
            {" "}
            · {name} {digits(values[i] ?? 0, 4)}
            {of}
          </span>
        );
      })}
    </p>
  );
}

/** Everything there is to see of it. */
export function Amplitude(): JSX.Element {
  useEffect(watch, []);
  const answer = line.value;
  const names = answer?.names ?? [];
  return (
    <section class="lanes amplitude" aria-labelledby="amplitude-title">
      <h2 id="amplitude-title" class="unseen">
        Amplitude
      </h2>
      <AtCursor />
      {refused.value && (
        <p class="problem" role="status">
          {refused.value}
        </p>
      )}
      {names.length > 1 && (
        <Choice
          label="Propagator"
          value={String(of.value)}
          options={names.map((name, i) => [String(i), name || `number ${i + 1}`] as const)}
          onChange={(next) => {
            of.value = Number(next);
            signs.value = null;
          }}
        />
      )}
      {answer !== null && (
        <>
          {answer.warnings
            .filter((warning) => ["on-shell", "table-ends", "stable-mediator", "space-like-ghost"].includes(warning.code))
            .map((warning) => (
              <p class="note" key={warning.code} role="status">
                {warning.message}
              </p>
            ))}
          <AmplitudeLanes />
          <div class="panes">
            <Argand />
            <Plane />
          </div>
          <Poles />
          <InOtherWords />
          {angular.value && (
            <>
              <Diagrams />
              <Angles />
            </>
          )}
          <Unitarity />
        </>
      )}
    </section>
  );
}
