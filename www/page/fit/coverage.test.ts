import { describe, expect, it } from "vitest";
import type { CoverageOf } from "../../shared/generated/CoverageOf";
import type { Summary } from "../../shared/generated/Summary";
import { findings, off } from "./coverage";

function level(fraction: number, low: number, high: number): CoverageOf {
  return { nominal: 0.683, fraction, low, high, trials: 200 };
}

function summary(curvature: CoverageOf, pull = 0): Summary {
  return {
    trials: 200,
    converged: 200,
    mean_statistic: 8,
    parameters: [
      { id: "r1.mass", truth: 2.87, bias: 0, bias_error: 1, spread: 1, mean_error: 1, at_limit: 0, pull_mean: pull, pull_mean_error: 0.07, pull_width: 1, pull_width_error: 0.05, curvature: [curvature], profile: [] },
    ],
  };
}

describe("what the trials found", () => {
  it("is silent where the errors hold", () => {
    expect(findings(summary(level(0.67, 0.637, 0.702)), () => "Mass")).toEqual([]);
  });

  it("says in words that too little is covered", () => {
    expect(off(level(0.5, 0.465, 0.535))).toBeGreaterThan(2.5);
    expect(findings(summary(level(0.5, 0.465, 0.535)), () => "Mass").join()).toMatch(/Mass: the 68.3 % curvature interval holds the truth in 50.0 %.*too small/);
  });

  it("says that too much is covered, and a bias", () => {
    const [bias, much] = findings(summary(level(0.9, 0.877, 0.919), -0.4), () => "Mass");
    expect(bias).toContain("too small by 0.40 of its error");
    expect(much).toContain("longer than it needs to be");
  });
});
