/** What a fit found: values, errors, how they moved, goodness, and why it stopped. */
import type { JSX } from "preact";
import { signed, THIN, withError } from "../format/number";
import { units } from "../parts/quantity";
import { Sym } from "../parts/sym";
import { Why } from "../parts/why";
import * as answers from "../state/answers";
import { withAt } from "../state/path";
import { change } from "../state/sheet";
import { Correlation } from "./correlation";
import { Covariance, Goodness } from "./goodness";
import { Nuisances } from "./nuisances";
import { WhyParameter } from "./why-parameter";

/** The result of the newest fit, or why there is none. */
export function Outcome(): JSX.Element {
  const fit = answers.fit.value;
  if (fit === null) {
    return (
      <p class="empty" role="status">
        {answers.fitting.value
          ? "Fitting…"
          : answers.fitRefused.value || "Tick below what is to be left free. The fit then follows every change by itself."}
      </p>
    );
  }
  const before = answers.fitBefore.value;
  return (
    <section aria-label="Result of the fit" aria-busy={answers.fitting.value}>
      <table class="plain results">
        <thead>
          <tr>
            <th scope="col">Result</th>
            <th scope="col" class="number">
              Value
            </th>
            <th scope="col" class="number">
              Error
            </th>
            <th scope="col">Unit</th>
            <th scope="col" class="number">
              Moved
            </th>
          </tr>
        </thead>
        <tbody>
          {fit.parameters.map((parameter) => {
            const text = withError(parameter.value, parameter.error, { unit: parameter.unit, per: 1 });
            const old = before?.parameters.find((entry) => entry.id === parameter.id);
            return (
              <tr key={parameter.id}>
                <th scope="row">
                  <Sym text={parameter.symbol} />
                </th>
                <td class="number strong">
                  <Why title={`${parameter.name}: where it comes from`} value={text.value}>
                    <Covariance />
                    <WhyParameter fit={fit} parameter={parameter} />
                  </Why>
                </td>
                <td class="number">{text.error === "" ? "–" : `±${THIN}${text.error}`}</td>
                <td>{units(parameter.unit)}</td>
                <td class="number quiet">
                  {old === undefined || parameter.error === null ? "" : `${signed((parameter.value - old.value) / parameter.error, 1)} σ`}
                  {parameter.atLimit && <span class="bad"> at its limit</span>}
                </td>
              </tr>
            );
          })}
        </tbody>
      </table>
      <Goodness fit={fit} />
      <p class={fit.converged ? "note" : "problem"}>{fit.why}</p>
      <p class="actions">
        <button type="button" class="button" onClick={take}>
          Take these values into the model
        </button>
      </p>
      <Correlation fit={fit} />
      <Nuisances fit={fit} />
    </section>
  );
}

function take(): void {
  const fit = answers.fit.peek();
  if (fit === null) return;
  change("take the fitted values", (before) =>
    Object.entries(fit.texts).reduce((next, [path, text]) => withAt(next, path, text), before),
  );
}
