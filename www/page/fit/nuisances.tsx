/** Nuisances: pull of each, and what one of its errors does to each parameter; as table and picture. */
import type { JSX } from "preact";
import { fixed, signed } from "../format/number";
import { Sym } from "../parts/sym";
import type { FitView } from "../state/answers";

/** Nuisances shown at first. */
const SHOWN = 12;
const [WIDTH, ROW, LEFT, MIDDLE] = [420, 18, 150, 215];

/** Ordered by the largest impact. */
export function Nuisances({ fit }: { fit: FitView }): JSX.Element | null {
  if (fit.nuisances.length === 0) return null;
  const largest = (impacts: readonly number[]): number => Math.max(0, ...impacts.map(Math.abs));
  const sorted = [...fit.nuisances].sort((a, b) => largest(b.impacts) - largest(a.impacts));
  const shown = sorted.slice(0, SHOWN);
  return (
    <details>
      <summary>Nuisances: pulls and impacts</summary>
      <Picture shown={shown} />
      <div class="table-box" tabIndex={0} role="region" aria-label="Pulls and impacts of the nuisances">
        <table class="plain nuisances">
          <caption>
            Impact: shift of the parameter, in its own errors, when the nuisance moves up by its fitted error
            {sorted.length > SHOWN && `; the ${SHOWN} largest of ${sorted.length}`}
          </caption>
          <thead>
            <tr>
              <th scope="col">Nuisance</th>
              <th scope="col" class="number">Pull</th>
              {fit.parameters.map((parameter) => (
                <th scope="col" class="number" key={parameter.id}>
                  <Sym text={parameter.symbol} />
                </th>
              ))}
            </tr>
          </thead>
          <tbody>
            {shown.map((nuisance) => (
              <tr key={nuisance.name}>
                <th scope="row">{nuisance.name}</th>
                <td class="number">
                  {signed(nuisance.pull, 2)} ± {fixed(nuisance.error, 2)}
                </td>
                {nuisance.impacts.map((impact, i) => (
                  <td class="number" key={i}>
                    {signed(impact, 2)}
                  </td>
                ))}
              </tr>
            ))}
          </tbody>
        </table>
      </div>
    </details>
  );
}

/** Left: pull with its error between −2 and 2. Right: the largest impact as a bar up to one error. */
function Picture({ shown }: { shown: FitView["nuisances"] }): JSX.Element {
  const height = ROW * shown.length + 40;
  const pull = (value: number): number => MIDDLE + Math.max(-2.2, Math.min(2.2, value)) * 28;
  return (
    <svg class="plot" viewBox={`0 0 ${WIDTH} ${height}`} role="img" aria-label="Pull of each nuisance and its largest impact on a parameter; the numbers are in the table below.">
      <path class="plot-level" d={`M${pull(-1)} 0V${height - 28}M${pull(1)} 0V${height - 28}M${pull(0)} 0V${height - 28}`} />
      {shown.map((nuisance, i) => {
        const y = ROW * i + ROW / 2 + 2;
        const bar = Math.min(1, Math.max(0, ...nuisance.impacts.map(Math.abs))) * 110;
        return (
          <g key={nuisance.name}>
            <text x={LEFT - 4} y={y + 4} text-anchor="end">
              {short(nuisance.name)}
            </text>
            <path class="plot-main" d={`M${pull(nuisance.pull - nuisance.error)} ${y}H${pull(nuisance.pull + nuisance.error)}M${pull(nuisance.pull)} ${y - 4}V${y + 4}`} />
            <path class="plot-bar" d={`M290 ${y - 5}h${bar.toFixed(1)}v10h-${bar.toFixed(1)}z`} />
          </g>
        );
      })}
      <text x={MIDDLE} y={height - 12} text-anchor="middle">
        pull (±1 marked)
      </text>
      <text x={345} y={height - 12} text-anchor="middle">
        largest impact, 0 to 1 error
      </text>
    </svg>
  );
}

function short(name: string): string {
  return name.length > 24 ? `${name.slice(0, 23)}…` : name;
}
