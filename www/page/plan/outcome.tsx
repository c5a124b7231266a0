/** What a plan says: timetable, errors at its end, how close it is to the best, what changed and what things cost. */
import type { JSX } from "preact";
import { Plot } from "../fit/plot";
import { StudyBar } from "../fit/study-bar";
import { clock, count, digits, fixed, hours, percent } from "../format/number";
import { Quantity, units } from "../parts/quantity";
import { Sym } from "../parts/sym";
import { symbolOf } from "../state/parameters";
import { plan, planned, type PlanView } from "../state/plan";
import { sheet } from "../state/sheet";
import { cursor } from "../state/view";
import { askCosts, costing } from "./make";
import { WhatIf } from "./what-if";

/** The result, or nothing before there is one. */
export function PlanOutcome(): JSX.Element | null {
  const made = plan.value;
  if (made === null) return null;
  return (
    <section aria-label="Plan">
      <Changed made={made} />
      <Timetable />
      <Forecasts made={made} />
      <Against made={made} />
      <Guarantee made={made} />
      {made.warnings
        .filter((warning) => warning.code !== "operators")
        .map((warning) => (
          <p class="note" key={warning.code + warning.message}>
            {warning.message}
          </p>
        ))}
    </section>
  );
}

function Changed({ made }: { made: PlanView }): JSX.Element | null {
  if (made.changes === null) return null;
  return (
    <details open>
      <summary>What changed against the plan before</summary>
      <ul class="plan-changes">
        {made.changes.sentences.map((sentence) => (
          <li key={sentence}>{symbols(sentence)}</li>
        ))}
        <li>Keeping the old plan would lose {percent(made.changes.loss_by_keeping)} of the information.</li>
      </ul>
    </details>
  );
}

/** Ids of parameters in a sentence as their symbols. */
function symbols(sentence: string): JSX.Element[] {
  return sentence.split(/(\b(?:r\d+|coherent|incoherent|background)\.\w+|\bspread\b)/).map((part, i) => (i % 2 === 0 ? <>{part}</> : <Sym text={symbolOf(part, sheet.value)} />));
}

function Timetable(): JSX.Element {
  return (
    <div class="table-box" tabIndex={0} role="region" aria-label="Timetable">
      <table class="plain timetable">
        <thead>
          <tr>
            <th scope="col">Begins</th>
            <th scope="col" class="number">
              Dial
            </th>
            <th scope="col" class="number">
              For
            </th>
            <th scope="col" class="number">
              Expected
            </th>
            <th scope="col">Why</th>
          </tr>
        </thead>
        <tbody>
          {planned.value.map((stop, i, all) => (
            <tr
              key={stop.at}
              class={stop.fill === all[i - 1]?.fill ? "" : "fill-begins"}
              onMouseEnter={() => (cursor.value = stop.w)}
              onMouseLeave={() => (cursor.value = null)}
            >
              <td>{clock(stop.at)}</td>
              <th scope="row" class="number strong">
                <Quantity text={stop.dial} />
              </th>
              <td class="number">{hours(stop.hours)}</td>
              <td class="number">{count(Math.round(stop.expected))}</td>
              <td class="quiet">{stop.why}</td>
            </tr>
          ))}
        </tbody>
      </table>
    </div>
  );
}

function Forecasts({ made }: { made: PlanView }): JSX.Element {
  const shown = (value: number | null | undefined, none: string): string => (value == null ? none : digits(value, 2));
  return (
    <>
      <div class="table-box" tabIndex={0} role="region" aria-label="Errors now and after the plan">
        <table class="plain forecasts">
          <thead>
            <tr>
              <th scope="col">Error of</th>
              <th scope="col" class="number">
                now
              </th>
              <th scope="col" class="number">
                after it
              </th>
              <th scope="col" class="number">
                equal times
              </th>
              <th scope="col" class="number">
                floor
              </th>
              <th scope="col">unit</th>
            </tr>
          </thead>
          <tbody>
            {made.forecasts.map(({ name, unit, goal, numbers }) => (
              <tr key={name}>
                <th scope="row" class={goal ? "strong" : ""}>
                  <Sym text={symbolOf(name, sheet.value)} />
                  {goal && <span class="quiet small"> goal{numbers.wanted == null ? "" : `: ${digits(numbers.wanted, 2)}`}</span>}
                </th>
                <td class="number">{shown(numbers.now, "open")}</td>
                <td class={numbers.wanted != null && (numbers.planned ?? Infinity) > numbers.wanted ? "number strong bad" : "number strong"}>
                  {shown(numbers.planned, "open")}
                </td>
                <td class="number">{shown(numbers.uniform, "open")}</td>
                <td class="number">{shown(numbers.floor, "")}</td>
                <td>{units(unit)}</td>
              </tr>
            ))}
          </tbody>
        </table>
      </div>
      <p class="note">
        Equal times: the same beam spread over every allowed setting. Floor: what no hours beat, with as many visits as planned
        here. {made.basis}
      </p>
    </>
  );
}

function Against({ made }: { made: PlanView }): JSX.Element | null {
  const { main } = made;
  const known = made.against.filter((pair): pair is [number, number] => pair[1] !== null);
  if (main === null || known.length < 2) return null;
  const symbol = symbolOf(main.name, sheet.value).replace(/_/g, "");
  const floor = main.numbers.floor ?? 0;
  return (
    <>
      <Plot
        words={`Error of ${symbol} against hours of beam: ${known.map(([h, e]) => `${digits(h, 3)} h ${digits(e, 2)}`).join(", ")} ${main.unit}`}
        x="hours of beam"
        y={`error of ${symbol}${main.unit ? ` (${units(main.unit)})` : ""}`}
        lines={[{ x: known.map(([h]) => h), y: known.map(([, e]) => e), look: "main" }]}
        levels={floor > 0 ? [[floor, "floor"]] : []}
        from={0}
      />
      <WhatIf known={known} symbol={symbol} unit={main.unit} planned={made.beamHours} />
    </>
  );
}

function Guarantee({ made }: { made: PlanView }): JSX.Element {
  const costs = costing.made.value?.value ?? [];
  return (
    <>
      <table class="plain guarantee">
        <tbody>
          <Line what="Guarantee of the best allocation" value={fixed(made.certificate, 4)} />
          <Line what={made.exact ? "This timetable; every one was judged" : "This timetable against it, at least"} value={percent(made.efficiency)} />
          <Line what="Equal times against it" value={percent(made.uniformEfficiency)} />
          {made.massOff !== null && <Line what={`Lost if the mass is off by its error now (${digits(made.massOff[0] * 1e6, 2)} keV)`} value={percent(made.massOff[1])} />}
          {made.logRatio !== null && (
            <Line what="2 ln of the likelihood ratio, planned and with equal times" value={`${digits(made.logRatio[0], 3)}, ${digits(made.logRatio[1], 3)}`} />
          )}
          <Line
            what={made.truths > 1 ? "Truths planned for, drawn from what is known; their accuracy" : "Planned for the best guess alone"}
            value={made.truths > 1 ? `${made.truths}${made.truthsAccuracy === null ? "" : `; ${percent(made.truthsAccuracy, 0)}`}` : ""}
          />
          {costs.map(([what, share]) => (
            <Line key={what} what={`Cost of ${what}`} value={percent(share)} />
          ))}
        </tbody>
      </table>
      <StudyBar study={costing} words="What each demand costs" onRun={askCosts} />
    </>
  );
}

function Line({ what, value }: { what: string; value: string }): JSX.Element {
  return (
    <tr>
      <th scope="row">{what}</th>
      <td class="number strong">{value}</td>
    </tr>
  );
}
