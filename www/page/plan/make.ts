/** Asks for plans: by a button, and by itself when a point has changed what is known. */
import { effect, signal } from "@preact/signals";
import type { Reply } from "../../shared/protocol";
import { study } from "../fit/study";
import { fit } from "../state/answers";
import { kept, measured, plan, type PlanView } from "../state/plan";
import { openings, sheet } from "../state/sheet";
import type { Sheet } from "../state/types";
import { ask } from "../state/work";

const HOUR_MS = 3.6e6;

/** The plan. */
export const making = study<PlanView>();
/** What each demand and property of the machine costs: (what, share of the information). */
export const costing = study<[string, number][]>();
/** Whether it is planned again after each point. */
export const again = signal(true);

/** Plans the hours left, and says what changed where there was a plan. */
export function makePlan(): void {
  const keep = kept();
  costing.made.value = null;
  void making.run(async (now, options) => {
    const asked = withHoursUsed(now);
    const reply = await ask({ kind: "plan", sheet: asked, costs: false, keep }, options);
    const made = readPlan(reply, now, Date.now());
    plan.value = made;
    return made;
  });
}

/** Asks what each demand and property of the machine costs. */
export function askCosts(): void {
  void costing.run(async (now, options) => {
    const { body } = await ask({ kind: "plan", sheet: withHoursUsed(now), costs: true, keep: null }, options);
    if (body.kind !== "plan") throw new Error("no plan in the answer");
    return body.plan.costs;
  });
}

/** The clock goes on while nothing is measured: where the sheet says when the hours began, those until now are used. */
export function withHoursUsed(now: Sheet, at = Date.now()): Sheet {
  const begun = Date.parse(now.plan.starts ?? "");
  if (now.plan.hours_used || !(at > begun)) return now;
  return { ...now, plan: { ...now.plan, hours_used: `${((at - begun) / HOUR_MS).toFixed(4)} h` } };
}

function readPlan({ body, columns }: Reply, now: Sheet, at: number): PlanView {
  if (body.kind !== "plan") throw new Error("no plan in the answer");
  const { plan: made, dial, forecasts } = body;
  const begun = Date.parse(now.plan.starts ?? "");
  const zero = Number.isFinite(begun) ? begun + body.begins_h * HOUR_MS : at;
  const [w, later, atOnce] = columns;
  const gain = atOnce ?? later;
  const main = forecasts.find((forecast) => forecast.goal) ?? forecasts[0] ?? null;
  const raw = [...made.goals, ...made.parameters].find((forecast) => forecast.name === main?.numbers.name);
  const per = main?.numbers.planned && raw?.planned ? raw.planned / main.numbers.planned : 1;
  return {
    stops: made.rows.map((row, i) => ({
      fill: row.fill,
      at: zero + row.start_h * HOUR_MS,
      w: row.w_gev,
      dial: dial[i] ?? "",
      hours: row.live_h,
      settle: row.settle_h,
      expected: row.expected_counts,
      why: row.why,
    })),
    forecasts,
    gain: w !== undefined && gain !== undefined ? { w: w.values, perHour: gain.values, now: atOnce !== undefined } : null,
    against: made.best_against_hours.map(([hours, error]) => [hours, error === null ? null : error / per]),
    main,
    beamHours: made.beam_h,
    certificate: made.certificate,
    efficiency: made.efficiency,
    exact: made.exact,
    uniformEfficiency: made.uniform_efficiency,
    massOff: made.loss_if_mass_off ?? null,
    truths: made.truths,
    truthsAccuracy: made.truths_accuracy ?? null,
    logRatio: made.log_ratio ?? null,
    stay: body.stay ?? null,
    basis: body.basis,
    changes: body.changes ?? null,
    warnings: made.warnings,
    raw: { rows: made.rows, parameters: made.parameters },
    dataKey: measured(now.data.rows),
    rowsThen: now.data.rows.length,
  };
}

/** Forgets the plan with its sheet, and plans again when the fit has taken in a new number. */
export function keepPlanning(): () => void {
  const stops = [
    effect(() => {
      void openings.value;
      plan.value = null;
    }),
    effect(() => {
      const found = fit.value;
      const made = plan.peek();
      if (found === null || made === null || !again.peek() || making.running.peek()) return;
      if (measured(sheet.peek().data.rows) !== made.dataKey) makePlan();
    }),
  ];
  return () => {
    for (const stop of stops) stop();
  };
}
