/** Words for what the trials found wrong with the errors a fit quotes. */
import type { CoverageOf } from "../../shared/generated/CoverageOf";
import type { Summary } from "../../shared/generated/Summary";

/** How many standard deviations off are worth a word (common practice, no source). */
const WORTH_A_WORD = 2.5;
/** A pull mean smaller than that harms nobody, however surely it is there. */
const SMALL_BIAS = 0.1;

/** How far the nominal coverage lies outside, in lengths of the interval on that side; above 0: too little is covered. */
export function off(level: CoverageOf): number {
  if (level.trials === 0) return 0;
  const away = level.nominal - level.fraction;
  const side = away > 0 ? level.high - level.fraction : level.fraction - level.low;
  return side > 0 ? away / side : 0;
}

/** One sentence for each thing that is off. */
export function findings(summary: Summary, nameOf: (id: string) => string): string[] {
  const found: string[] = [];
  if (summary.converged < summary.trials) {
    found.push(`${summary.trials - summary.converged} of ${summary.trials} fits did not end in a minimum with an error for every parameter.`);
  }
  for (const parameter of summary.parameters) {
    const name = nameOf(parameter.id);
    if (parameter.at_limit > 0) found.push(`${name}: ${parameter.at_limit} fits ended at its limit, without a curvature error.`);
    if (Math.abs(parameter.pull_mean) > Math.max(SMALL_BIAS, WORTH_A_WORD * parameter.pull_mean_error)) {
      found.push(`${name}: the fit comes out too ${parameter.pull_mean > 0 ? "large" : "small"} by ${Math.abs(parameter.pull_mean).toFixed(2)} of its error on average.`);
    }
    for (const [kind, levels] of [["curvature", parameter.curvature], ["profile", parameter.profile]] as const) {
      const worst = levels.find((level) => Math.abs(off(level)) > WORTH_A_WORD);
      if (worst === undefined) continue;
      const held = `the ${(worst.nominal * 100).toFixed(1)} % ${kind} interval holds the truth in ${(worst.fraction * 100).toFixed(1)} % of the trials`;
      const short = off(worst) > 0;
      const advice = short ? (kind === "curvature" ? "the error is too small: quote the profile interval, and test it with trials too" : "the interval is too short") : "it is longer than it needs to be";
      found.push(`${name}: ${held}; ${advice}.`);
    }
  }
  return found;
}
