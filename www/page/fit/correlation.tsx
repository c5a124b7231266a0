/** Correlation of the fitted parameters, and the nuisances that went along. */
import type { JSX } from "preact";
import { fixed, signed } from "../format/number";
import { Sym } from "../parts/sym";
import type { FitView } from "../state/answers";

/** The matrix, lower half. */
export function Correlation({ fit }: { fit: FitView }): JSX.Element | null {
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

/** Pulls of the nuisances. */
export function Nuisances({ fit }: { fit: FitView }): JSX.Element | null {
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
