/** Poles in both conventions with residue and sheet, the state in other words, the unitarity report. */
import type { JSX } from "preact";
import { digits, fixed } from "../format/number";
import { Quantity } from "../parts/quantity";
import type { PoleReading, WaveReading } from "../state/types";
import { line, waves } from "./state";

function energy(gev: number): string {
  return gev < 12 ? `${digits(gev * 1e3, 7)} MeV` : `${digits(gev, 8)} GeV`;
}

function complex([re, im]: readonly [number, number]): string {
  if (Math.abs(im) < 1e-12 * Math.abs(re)) return digits(re, 4);
  return `${digits(re, 4)} ${im < 0 ? "−" : "+"} ${digits(Math.abs(im), 4)} i`;
}

/** The table of poles. */
export function Poles(): JSX.Element | null {
  const answer = line.value;
  if (answer === null) return null;
  return (
    <section aria-label="Poles">
      <h3>Poles</h3>
      <p class="note">
        {answer.pole_note}
        {answer.stable ? " A stable mediator has no width and no lifetime." : answer.lifetime_s != null && ` Lifetime ħ/Γ = ${digits(answer.lifetime_s, 4)} s.`}
      </p>
      {answer.poles.length > 0 && (
        <div class="table-scroll">
          <table>
            <thead>
              <tr>
                <th scope="col">√s_R = M − iΓ/2: M</th>
                <th scope="col">Γ</th>
                <th scope="col">s_R = M̄² − iM̄Γ̄: M̄</th>
                <th scope="col">Γ̄</th>
                <th scope="col">Residue</th>
                <th scope="col">Sheet: sign of Im q</th>
              </tr>
            </thead>
            <tbody>
              {answer.poles.map((pole, i) => (
                <PoleRow key={i} pole={pole} names={answer.thresholds.map(([name]) => name)} />
              ))}
            </tbody>
          </table>
        </div>
      )}
    </section>
  );
}

function PoleRow({ pole, names }: { pole: PoleReading; names: readonly string[] }): JSX.Element {
  return (
    <tr>
      <td>{energy(pole.mass_gev)}</td>
      <td>{energy(pole.width_gev)}</td>
      <td>{pole.mass_bar_gev == null ? "–" : energy(pole.mass_bar_gev)}</td>
      <td>{pole.width_bar_gev == null ? "–" : energy(pole.width_bar_gev)}</td>
      <td>{pole.residue == null ? "two poles coincide" : complex(pole.residue)}</td>
      <td>{names.length === 0 ? "only one" : names.map((name, i) => `${name || i + 1} ${pole.sheet[i] ? "+" : "−"}`).join(", ")}</td>
    </tr>
  );
}

/** Mass and width in every convention. */
export function InOtherWords(): JSX.Element | null {
  const words = line.value?.words ?? [];
  if (words.length === 0) return null;
  return (
    <section aria-label="In other words">
      <h3>The same state in other words</h3>
      <div class="table-scroll">
        <table>
          <thead>
            <tr>
              <th scope="col">Convention</th>
              <th scope="col">Mass</th>
              <th scope="col">Width</th>
              <th scope="col">Is it the same curve?</th>
            </tr>
          </thead>
          <tbody>
            {words.map((row) => (
              <tr key={row.convention}>
                <th scope="row">{row.convention.replace("sqrt(s_R)", "√s_R").replace("Gamma", "Γ").replace(/ - /g, " − ").replace("^2", "²")}</th>
                <td>
                  <Quantity text={row.mass} />
                </td>
                <td>
                  <Quantity text={row.width} />
                </td>
                <td class="words">{row.note.replace(/Delta/g, "Δ").replace(/Gamma/g, "Γ").replace("sqrt(s_R)", "√s_R").replace(/\^2/g, "²")}</td>
              </tr>
            ))}
          </tbody>
        </table>
      </div>
    </section>
  );
}

/** Elastic unitarity of a sum of resonances, or the partial waves of diagrams. */
export function Unitarity(): JSX.Element | null {
  const elastic = line.value?.elastic ?? null;
  const report = waves.value;
  if (elastic === null && report === null) return null;
  return (
    <section aria-label="Unitarity">
      <h3>Unitarity</h3>
      {elastic !== null && <p class={elastic.sum > 1 ? "problem" : "note"}>{elastic.note}</p>}
      {report !== null && (
        <>
          <p class={report.breaches.length > 0 ? "problem" : "note"}>{report.note}</p>
          {report.breaches.length > 0 && (
            <details>
              <summary>Which waves, and from where</summary>
              <ul>
                {report.breaches.map((wave, i) => (
                  <li key={i}>
                    J = {wave.j}, {wave.initial} → {wave.outgoing}: from W = {energy(wave.w_gev ?? 0)}
                  </li>
                ))}
              </ul>
            </details>
          )}
          <WaveTable list={report.waves ?? []} />
        </>
      )}
    </section>
  );
}

function WaveTable({ list }: { list: readonly WaveReading[] }): JSX.Element {
  return (
    <div class="table-scroll">
      <table class="waves">
        <thead>
          <tr>
            <th scope="col">J</th>
            <th scope="col">From</th>
            <th scope="col">To</th>
            <th scope="col">Re a</th>
            <th scope="col">Im a</th>
            <th scope="col">|Re a| against ½</th>
          </tr>
        </thead>
        <tbody>
          {list.map((wave, i) => (
            <tr key={i}>
              <td>{wave.j}</td>
              <td>{wave.initial}</td>
              <td>{wave.outgoing}</td>
              <td>{digits(wave.re, 3)}</td>
              <td>{digits(wave.im, 3)}</td>
              <td>
                <meter min={0} max={0.5} high={0.4999} value={Math.min(0.5, Math.abs(wave.re))}>
                  {fixed(Math.abs(wave.re), 3)}
                </meter>
              </td>
            </tr>
          ))}
        </tbody>
      </table>
    </div>
  );
}
