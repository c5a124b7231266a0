/** A comb of points for a peak of unknown mass: its chance, its timetable, and the hand-over to the measurement. */
import type { JSX } from "preact";
import type { CombReading } from "../../shared/generated/CombReading";
import { study } from "../fit/study";
import { Cautions, StudyBar } from "../fit/study-bar";
import { clock, count, digits, fixed, hours, percent } from "../format/number";
import { Field } from "../parts/field";
import { Quantity } from "../parts/quantity";
import { accept } from "../state/plan";
import { rows, setField, sheet } from "../state/sheet";
import { ask } from "../state/work";
import { makePlan, withHoursUsed } from "./make";

const HOUR_MS = 3.6e6;
const TRIALS = 1000;

const combing = study<CombReading & { zero: number; rowsThen: number }>();

function run(): void {
  void combing.run(async (now, options) => {
    const { body } = await ask({ kind: "comb", sheet: withHoursUsed(now), trials: TRIALS, seed: 1 }, options);
    if (body.kind !== "comb") throw new Error("no comb in the answer");
    const begun = Date.parse(now.plan.starts ?? "");
    const zero = Number.isFinite(begun) ? begun + body.reading.begins_h * HOUR_MS : Date.now();
    return { ...body.reading, zero, rowsThen: now.data.rows.length };
  });
}

/** Its fields, button and answer. */
export function Comb(): JSX.Element {
  const made = combing.made.value?.value;
  return (
    <>
      <div class="fields">
        <Field optional path="plan.comb.reach" label="Reach to either side" example="two errors of the mass" />
        <Field optional path="plan.comb.spacing" label="Spacing, in observed FWHM" example="0.6" />
        <Field optional path="plan.comb.dwell" label="Time at each point" example="the hours, shared out" />
        <Field optional path="plan.comb.significance" label="Found at, deviations (global)" example="5" />
      </div>
      <StudyBar study={combing} words="Lay the comb" onRun={run} />
      {made && <Result made={made} />}
    </>
  );
}

function Result({ made }: { made: CombReading & { zero: number; rowsThen: number } }): JSX.Element {
  const { comb } = made;
  return (
    <section aria-label="Comb">
      <p class="dial-line">
        <span class="figure">{percent(comb.probability[0], 0)}</span> chance of {digits(made.significance, 2)} deviations
      </p>
      <p class="note">
        ±{percent(comb.probability[1])} from {TRIALS} pseudo-experiments. Observed width at half height {digits(comb.fwhm_gev * 1e3, 3)} MeV;
        expected local significance {fixed(comb.expected_local, 1)}, of which {fixed(comb.local_needed, 1)} is needed for having looked
        everywhere. {hours(comb.left_h)} left afterwards for measuring what was found.
      </p>
      <HandOver made={made} />
      <div class="table-box" tabIndex={0} role="region" aria-label="Timetable of the comb">
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
              <th scope="col">
                <span class="unseen">Action</span>
              </th>
            </tr>
          </thead>
          <tbody>
            {comb.rows.map((row, i) => (
              <tr key={row.start_h}>
                <td>{clock(made.zero + row.start_h * HOUR_MS)}</td>
                <th scope="row" class="number strong">
                  <Quantity text={made.dial[i] ?? ""} />
                </th>
                <td class="number">{hours(row.live_h)}</td>
                <td class="number">{count(row.expected_counts)}</td>
                <td>
                  {i === rows.value.length - made.rowsThen && (
                    <button
                      type="button"
                      class="link"
                      onClick={() =>
                        accept({
                          fill: row.fill,
                          at: made.zero + row.start_h * HOUR_MS,
                          w: row.w_gev,
                          dial: made.dial[i] ?? "",
                          hours: row.live_h,
                          settle: row.settle_h,
                          expected: row.expected_counts,
                          why: row.why,
                        })
                      }
                    >
                      Start
                    </button>
                  )}
                </td>
              </tr>
            ))}
          </tbody>
        </table>
      </div>
      <Choices caption="Other times at each point" head="h a point" rows={comb.by_dwell.map(([h, p, z]) => [digits(h, 3), percent(p, 0), fixed(z, 1)])} last="expected deviations" />
      <Choices caption="The same beam at other spacings" head="FWHM" rows={comb.by_spacing.map(([s, n, p]) => [digits(s, 2), percent(p, 0), String(n)])} last="points" />
      <Cautions warnings={comb.warnings} />
    </section>
  );
}

function HandOver({ made }: { made: CombReading }): JSX.Element | null {
  const found = made.comb.found;
  if (!found) return null;
  return (
    <>
      <p class={made.hand_over ? "" : "note"}>
        So far the strongest excess lies at {digits(found[0], 7)} GeV with {fixed(found[1], 1)} deviations (global){made.hand_over ? ": found." : "."}
      </p>
      {made.hand_over && (
        <p class="actions">
          <button
            type="button"
            class="button button-main"
            onClick={() => {
              setField("plan.comb", undefined, "from the comb to the measurement");
              makePlan();
            }}
          >
            Now measure it: plan the rest
          </button>
        </p>
      )}
    </>
  );
}

function Choices(props: { caption: string; head: string; last: string; rows: string[][] }): JSX.Element {
  return (
    <table class="plain">
      <caption>{props.caption}</caption>
      <thead>
        <tr>
          <th scope="col" class="number">
            {props.head}
          </th>
          <th scope="col" class="number">
            chance
          </th>
          <th scope="col" class="number">
            {props.last}
          </th>
        </tr>
      </thead>
      <tbody>
        {props.rows.map((row) => (
          <tr key={row[0]}>
            {row.map((cell, i) => (
              <td class="number" key={i}>
                {cell}
              </td>
            ))}
          </tr>
        ))}
      </tbody>
    </table>
  );
}

/** Whether the sheet asks for a comb. */
export const combed = (): boolean => sheet.value.plan.comb != null;
