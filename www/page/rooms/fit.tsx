/** Fit: what is left free, what is known beforehand, and what comes out with how much trust. */
import type { JSX } from "preact";
import { digits, fixed, pValue, signed, THIN, withError } from "../format/number";
import { Fraction, Why } from "../parts/why";
import * as answers from "../state/answers";
import { parametersOf } from "../state/parameters";
import { textAt, withAt } from "../state/path";
import { change, setField, sheet } from "../state/sheet";
import { Quantity, units } from "../parts/quantity";
import { Sym } from "../parts/sym";

/** The room. */
export function FitRoom(): JSX.Element {
  return (
    <>
      <Outcome />
      <Free />
    </>
  );
}

function Free(): JSX.Element {
  const now = sheet.value;
  const { free, constraints = [] } = now.fit;
  return (
    <fieldset>
      <legend>Parameters</legend>
      <table class="plain">
        <thead>
          <tr>
            <th scope="col">Free</th>
            <th scope="col">Parameter</th>
            <th scope="col">Now</th>
            <th scope="col">Known beforehand</th>
          </tr>
        </thead>
        <tbody>
          {parametersOf(now).map((parameter) => {
            const on = free.includes(parameter.id);
            const at = constraints.findIndex((entry) => entry.parameter === parameter.id);
            const known = constraints[at]?.value ?? "";
            const problem = at < 0 ? undefined : answers.problemAt(`fit.constraints[${at}].value`);
            return (
              <tr key={parameter.id}>
                <td>
                  <label class="tick">
                    <input
                      type="checkbox"
                      aria-label={`${parameter.name} free`}
                      checked={on}
                      onChange={() => setField("fit.free", on ? free.filter((id) => id !== parameter.id) : order([...free, parameter.id]), on ? `fix ${parameter.name}` : `free ${parameter.name}`)}
                    />
                  </label>
                </td>
                <th scope="row">
                  <Sym text={parameter.symbol} /> <span class="quiet small">{parameter.name}</span>
                </th>
                <td class="number">
                  <Quantity text={textAt(now, parameter.path)} />
                </td>
                <td>
                  <input
                    type="text"
                    class="cell-input"
                    aria-label={`${parameter.name} known beforehand`}
                    aria-invalid={problem ? "true" : undefined}
                    title={problem?.message ?? ""}
                    value={known}
                    placeholder="nothing"
                    onInput={(event) => constrain(parameter.id, event.currentTarget.value)}
                  />
                </td>
              </tr>
            );
          })}
        </tbody>
      </table>
    </fieldset>
  );
}

function order(ids: string[]): string[] {
  const all = parametersOf(sheet.peek()).map((parameter) => parameter.id);
  return ids.sort((a, b) => all.indexOf(a) - all.indexOf(b));
}

function constrain(id: string, value: string): void {
  change(
    "what is known beforehand",
    (before) => {
      const rest = (before.fit.constraints ?? []).filter((entry) => entry.parameter !== id);
      const constraints = value === "" ? rest : [...rest, { parameter: id, value }];
      return { ...before, fit: { ...before.fit, constraints } };
    },
    `constraint ${id}`,
  );
}

function Outcome(): JSX.Element {
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
                <td class="number strong">{text.value}</td>
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

function Goodness({ fit }: { fit: answers.FitView }): JSX.Element {
  return (
    <p class="goodness">
      <Why
        title="Goodness of fit"
        value={
          <>
            <span class="sym">χ²</span> {digits(fit.statistic, 4)} / {fit.degrees}
          </>
        }
      >
        <math display="block">
          <mrow>
            <mn>2</mn>
            <munder>
              <mo>∑</mo>
              <mi>j</mi>
            </munder>
            <mrow>
              <mo>[</mo>
              <msub>
                <mi>μ</mi>
                <mi>j</mi>
              </msub>
              <mo>−</mo>
              <msub>
                <mi>n</mi>
                <mi>j</mi>
              </msub>
              <mo>+</mo>
              <msub>
                <mi>n</mi>
                <mi>j</mi>
              </msub>
              <mi>ln</mi>
              <Fraction over={<><msub><mi>n</mi><mi>j</mi></msub></>} under={<><msub><mi>μ</mi><mi>j</mi></msub></>} />
              <mo>]</mo>
            </mrow>
          </mrow>
        </math>
        <p>
          For counts; for cross sections the squared residuals weighted by the inverse covariance. Constraints and nuisances
          add their squared pulls.
        </p>
        <p class="note">Baker and Cousins, Nucl. Instrum. Methods 221 (1984) 437.</p>
      </Why>
      {fit.p !== null && <> · p {pValue(fit.p)}</>}
    </p>
  );
}

function Correlation({ fit }: { fit: answers.FitView }): JSX.Element | null {
  if (fit.parameters.length < 2) return null;
  return (
    <details>
      <summary>Correlation</summary>
      <table class="plain correlation">
        <thead>
          <tr>
            <td />
            {fit.parameters.map((parameter) => (
              <th scope="col" class="number" key={parameter.id}>
                <Sym text={parameter.symbol} />
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          {fit.parameters.map((parameter, i) => (
            <tr key={parameter.id}>
              <th scope="row">
                <Sym text={parameter.symbol} />
              </th>
              {fit.parameters.map((other, j) => (
                <td class="number" key={other.id}>
                  {j > i ? "" : fixed(fit.correlation[i]?.[j] ?? Number.NaN, 2)}
                </td>
              ))}
            </tr>
          ))}
        </tbody>
      </table>
    </details>
  );
}

function Nuisances({ fit }: { fit: answers.FitView }): JSX.Element | null {
  if (fit.nuisances.length === 0) return null;
  return (
    <details>
      <summary>Nuisances</summary>
      <table class="plain">
        <tbody>
          {fit.nuisances.map((nuisance) => (
            <tr key={nuisance.name}>
              <th scope="row">{nuisance.name}</th>
              <td class="number">
                {signed(nuisance.pull, 2)} ± {fixed(nuisance.error, 2)}
              </td>
            </tr>
          ))}
        </tbody>
      </table>
    </details>
  );
}

function take(): void {
  const fit = answers.fit.peek();
  if (fit === null) return;
  change("take the fitted values", (before) =>
    Object.entries(fit.texts).reduce((next, [path, text]) => withAt(next, path, text), before),
  );
}
