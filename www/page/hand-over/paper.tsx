/** What stands on the hand-over page: where we are, results, plot, points, assumptions, provenance, cautions. */
import type { JSX } from "preact";
import { clock, count, digits, fixed, hours, pValue, signed, THIN, withError } from "../format/number";
import { Chart } from "../lanes/chart";
import { drawBeamTime } from "../lanes/beam-time";
import { drawLineShape } from "../lanes/line-shape";
import { drawPulls } from "../lanes/pulls";
import { Legend } from "../lanes/legend";
import { Quantity, units } from "../parts/quantity";
import { Sym } from "../parts/sym";
import * as answers from "../state/answers";
import { calibrationAge, needsAttention } from "../state/health";
import { otherSolutions, whatSeparates } from "../state/others";
import { symbolOf } from "../state/parameters";
import { nextStop, plan, planned } from "../state/plan";
import { sheet } from "../state/sheet";
import { version } from "../state/version";
import { Assumptions } from "./assumptions";

/** The paper. */
export function Paper(): JSX.Element {
  const now = sheet.value;
  return (
    <article class="paper">
      <header>
        <h1>{now.title || "Untitled scan"}</h1>
        <p class="note">
          {now.invented && <strong>Invented demo. </strong>}
          Hand-over of {new Date().toLocaleString("en-GB", { dateStyle: "long", timeStyle: "short" })}. Widthwise {version}, sheet format {now.version}.
        </p>
      </header>
      <Where />
      <Results />
      <section>
        <h2>Scan</h2>
        <Legend />
        <figure class="lane">
          <figcaption>Cross section (nb)</figcaption>
          <Chart height={250} labelled={false} draw={drawLineShape} />
        </figure>
        <figure class="lane">
          <figcaption>Residuals (errors)</figcaption>
          <Chart height={96} labelled={false} draw={drawPulls} />
        </figure>
        <figure class="lane">
          <figcaption>Beam time (h), planned hatched</figcaption>
          <Chart height={106} labelled draw={drawBeamTime} />
        </figure>
      </section>
      {now.note !== "" && (
        <section>
          <h2>Note</h2>
          <p class="kept-lines">{now.note}</p>
        </section>
      )}
      <Plan />
      <Points />
      <Assumptions />
      <section>
        <h2>Energy scale</h2>
        <p>
          {calibrationAge.value}
          {now.beam.calibration.at && ` (${now.beam.calibration.at})`}. Offset of W {now.beam.calibration.offset || "none"}, slope{" "}
          {now.beam.calibration.slope || "none"}. {now.beam.calibration.note}
        </p>
      </section>
      <Cautions />
    </article>
  );
}

function Where(): JSX.Element {
  const running = answers.runningPoint.value;
  const next = nextStop.value;
  return (
    <dl class="facts">
      <div>
        <dt>Running</dt>
        <dd>{running === null ? "no point" : `${running.id} at ${running.dial} on the dial`}</dd>
      </div>
      <div>
        <dt>Next</dt>
        <dd>{next === null ? "not planned" : `${next.dial} for ${hours(next.hours)}, ${next.why}`}</dd>
      </div>
      <div>
        <dt>Beam time left</dt>
        <dd>{sheet.value.plan.hours || "not entered"}</dd>
      </div>
    </dl>
  );
}

function Results(): JSX.Element {
  const fit = answers.fit.value;
  if (fit === null) return <p class="note">No fit. {answers.fitRefused.value}</p>;
  return (
    <section>
      <h2>Results</h2>
      <table class="plain">
        <tbody>
          {fit.parameters.map((parameter) => {
            const text = withError(parameter.value, parameter.error, { unit: parameter.unit, per: 1 });
            return (
              <tr key={parameter.id}>
                <th scope="row">
                  <Sym text={parameter.symbol} /> {parameter.name}
                </th>
                <td class="number strong">{text.value}</td>
                <td class="number">{text.error === "" ? "" : `±${THIN}${text.error}`}</td>
                <td>
                  {units(parameter.unit)}
                  {parameter.atLimit && " at its limit"}
                </td>
              </tr>
            );
          })}
        </tbody>
      </table>
      <p>
        <span class="sym">χ²</span> {digits(fit.statistic, 4)} / {fit.degrees}
        {fit.p !== null && `, p ${pValue(fit.p)}`}. {fit.why}
      </p>
      <Others />
    </section>
  );
}

/** What else the data allow; nothing is said where it is not known. */
function Others(): JSX.Element | null {
  const others = otherSolutions.value;
  if (others === null) return <p class="note">Whether other solutions describe the data as well has not been looked for.</p>;
  if (others.length === 0) return <p>No other solution describes the data as well.</p>;
  return (
    <>
      {others.map((solution, i) => (
        <p key={i}>
          As good ({fixed(Math.max(0, solution.above_best), 2)} above the best in 2 NLL):{" "}
          {solution.parameters.map((parameter, k) => {
            const text = withError(parameter.value, parameter.error, { unit: parameter.unit, per: 1 });
            return (
              <span key={parameter.id}>
                {k > 0 && ", "}
                <Sym text={symbolOf(parameter.id, sheet.value)} /> {text.value}
                {text.error !== "" && ` ±${THIN}${text.error}`} {units(parameter.unit)}
              </span>
            );
          })}
          .
        </p>
      ))}
      <p class="note">{whatSeparates.value}</p>
    </>
  );
}

function Plan(): JSX.Element | null {
  const stops = planned.value;
  if (stops.length === 0) return null;
  return (
    <section>
      <h2>Plan</h2>
      <table class="plain">
        <thead>
          <tr>
            <th scope="col" class="number">Dial</th>
            <th scope="col" class="number">W</th>
            <th scope="col" class="number">Time</th>
            <th scope="col">Begins</th>
            <th scope="col" class="number">Expected</th>
            <th scope="col">Why</th>
          </tr>
        </thead>
        <tbody>
          {stops.slice(0, 40).map((stop, i) => (
            <tr key={i}>
              <th scope="row" class="number strong"><Quantity text={stop.dial} /></th>
              <td class="number">{(stop.w * 1e3).toFixed(2)} MeV</td>
              <td class="number">{hours(stop.hours)}</td>
              <td>{clock(stop.at)}</td>
              <td class="number">{count(Math.round(stop.expected))}</td>
              <td>{stop.why}</td>
            </tr>
          ))}
        </tbody>
      </table>
      {plan.value?.forecasts.map(({ name, unit, numbers }) => (
        <p key={name}>
          Error of {symbolOf(name, sheet.value).replace(/_/g, "")}: {numbers.now == null ? "unknown" : digits(numbers.now, 2)} now,{" "}
          {numbers.planned == null ? "unknown" : digits(numbers.planned, 2)} {units(unit)} after it.
        </p>
      ))}
    </section>
  );
}

function Points(): JSX.Element {
  const byId = new Map(answers.points.value.map((point) => [point.id, point]));
  const rows = sheet.value.data.rows;
  return (
    <section>
      <h2>Points</h2>
      <table class="plain points-table">
        <thead>
          <tr>
            <th scope="col">Point</th>
            <th scope="col" class="number">Dial</th>
            <th scope="col" class="number">W</th>
            <th scope="col" class="number">Luminosity</th>
            <th scope="col" class="number">Seen</th>
            <th scope="col" class="number">Expected</th>
            <th scope="col" class="number">Pull</th>
            <th scope="col">Comment</th>
          </tr>
        </thead>
        <tbody>
          {rows.slice(0, 200).map((row) => {
            const point = byId.get(row.id);
            return (
              <tr key={row.id}>
                <th scope="row">
                  {row.id}
                  {row.left_out && " (left out)"}
                  {row.running && " (running)"}
                </th>
                <td class="number"><Quantity text={point?.dial ?? row.setting ?? ""} /></td>
                <td class="number">{point === undefined ? "no energy" : `${(point.w * 1e3).toFixed(2)} MeV`}</td>
                <td class="number"><Quantity text={row.luminosity ?? ""} /></td>
                <td class="number">{row.counts ?? row.cross_section ?? ""}</td>
                <td class="number">{point?.expected === null || point === undefined ? "" : count(point.expected)}</td>
                <td class="number">{point?.pull === null || point === undefined ? "" : signed(point.pull, 2)}</td>
                <td>{row.comment}</td>
              </tr>
            );
          })}
        </tbody>
      </table>
      {rows.length > 200 && <p class="note">and {rows.length - 200} more in the file</p>}
    </section>
  );
}

function Cautions(): JSX.Element {
  return (
    <section>
      <h2>Cautions</h2>
      <ul class="bullets">
        {needsAttention.value.map((note) => (
          <li key={note.message}>{note.message}</li>
        ))}
        <li>
          Beam changes are made by the accelerator's operators under the facility's procedures. Radiation and machine protection
          are not modelled.
        </li>
      </ul>
    </section>
  );
}
