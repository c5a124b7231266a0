/** What a plan says: the timetable, the errors at its end, how close it is to the best, and what the machine costs. */
import type { JSX } from "preact";
import { count, digits, fixed, hours } from "../format/number";
import { Quantity, units } from "../parts/quantity";
import { plan, type PlanView } from "../state/plan";
import { addRow } from "../state/rows";
import { revision } from "../state/sheet";
import { cursor } from "../state/view";

/** The result, or nothing before there is one. */
export function PlanOutcome(): JSX.Element | null {
  const made = plan.value;
  if (made === null) return null;
  return (
    <section aria-label="Plan">
      {made.revision !== revision.value && <p class="note">Made before the last change of the sheet.</p>}
      <Timetable made={made} />
      <Forecasts made={made} />
      <p class="note">
        {fixed(made.efficiency * 100, 1)} % of the information that {made.exact ? "any" : "the best"} allocation of these{" "}
        {hours(made.beamHours)} could bring{made.exact ? "; every timetable was judged" : ", at least"}. Equal time everywhere:{" "}
        {fixed(made.uniformEfficiency * 100, 0)} %. The optimum is guaranteed to {digits(made.certificate, 4)}.
      </p>
      {made.costs.length > 0 && (
        <details>
          <summary>What each demand costs</summary>
          <table class="plain">
            <tbody>
              {made.costs.map(([what, share]) => (
                <tr key={what}>
                  <th scope="row">{what}</th>
                  <td class="number">{fixed(share * 100, 1)} %</td>
                </tr>
              ))}
            </tbody>
          </table>
        </details>
      )}
      {made.warnings.map((warning) => (
        <p class="note" key={warning.code + warning.message}>
          {warning.message}
        </p>
      ))}
    </section>
  );
}

function Timetable({ made }: { made: PlanView }): JSX.Element {
  return (
    <div class="table-box" tabIndex={0} role="region" aria-label="Timetable">
      <table class="plain">
        <thead>
          <tr>
            <th scope="col" class="number">Dial</th>
            <th scope="col" class="number">Time</th>
            <th scope="col" class="number">Starts in</th>
            <th scope="col" class="number">Expected</th>
            <th scope="col">Why</th>
            <th scope="col">
              <span class="unseen">Action</span>
            </th>
          </tr>
        </thead>
        <tbody>
          {made.stops.map((stop, i) => (
            <tr key={`${stop.start}`} onMouseEnter={() => (cursor.value = stop.w)} onMouseLeave={() => (cursor.value = null)}>
              <th scope="row" class="number strong">
                <Quantity text={stop.dial} />
              </th>
              <td class="number">{hours(stop.hours)}</td>
              <td class="number">{hours(stop.start)}</td>
              <td class="number">{count(Math.round(stop.expected))}</td>
              <td>{stop.why}</td>
              <td>
                {i === 0 && (
                  <button type="button" class="link" onClick={() => addRow({ setting: stop.dial }, true)}>
                    Start
                  </button>
                )}
              </td>
            </tr>
          ))}
        </tbody>
      </table>
    </div>
  );
}

function Forecasts({ made }: { made: PlanView }): JSX.Element {
  const shown = (value: number | null): string => (value === null ? "never" : digits(value, 2));
  return (
    <table class="plain">
      <caption>Errors, now and after the plan</caption>
      <thead>
        <tr>
          <th scope="col">Quantity</th>
          <th scope="col" class="number">now</th>
          <th scope="col" class="number">after it</th>
          <th scope="col" class="number">equal times</th>
          <th scope="col" class="number">floor</th>
          <th scope="col">unit</th>
        </tr>
      </thead>
      <tbody>
        {made.forecasts.map((forecast) => (
          <tr key={forecast.name}>
            <th scope="row">{forecast.name}</th>
            <td class="number">{forecast.now === null ? "unknown" : digits(forecast.now, 2)}</td>
            <td class="number strong">{shown(forecast.planned)}</td>
            <td class="number">{shown(forecast.uniform)}</td>
            <td class="number">{forecast.floor === null ? "" : digits(forecast.floor, 2)}</td>
            <td>{units(forecast.unit)}</td>
          </tr>
        ))}
      </tbody>
    </table>
  );
}
