/** The amplitude behind the curve: propagator, poles, angles, diagrams, unitarity. */
import type { JSX } from "preact";
import { useEffect } from "preact/hooks";
import { Choice } from "../parts/field";
import { ReadOut } from "../lanes/read-out";
import { AmplitudeLanes } from "./lanes";
import { Angles } from "./angles";
import { Argand } from "./argand";
import { Diagrams } from "./drawn";
import { Plane } from "./plane";
import { InOtherWords, Poles, Unitarity } from "./report";
import { angular, line, of, refused, signs, watch } from "./state";

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
      <ReadOut />
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
