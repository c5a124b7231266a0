/** Correlation of the fitted parameters. */
import type { JSX } from "preact";
import { fixed } from "../format/number";
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
