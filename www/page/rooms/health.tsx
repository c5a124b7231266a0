/** Whether the running point is healthy: seen, expected so far, p-value; each with what is behind it. */
import type { JSX } from "preact";
import { count, digits, hours, pValue, signed } from "../format/number";
import { Fraction, Why } from "../parts/why";
import * as answers from "../state/answers";
import { sheet } from "../state/sheet";

/** The three numbers. */
export function Health({ point }: { point: answers.PointView }): JSX.Element {
  return (
    <dl class="trio">
      <div>
        <dt>Seen</dt>
        <dd>{point.seen === null ? "–" : count(point.seen)}</dd>
      </div>
      <div>
        <dt>Expected so far</dt>
        <dd>
          {point.expected === null ? (
            "–"
          ) : (
            <Why title="Counts expected so far" value={count(point.expected)}>
              <math display="block">
                <mi>μ</mi>
                <mo>=</mo>
                <mi>L</mi>
                <mi>ε</mi>
                <mi>B</mi>
                <msub>
                  <mi>σ</mi>
                  <mtext>obs</mtext>
                </msub>
                <mo>(</mo>
                <mi>W</mi>
                <mo>)</mo>
                <mo>+</mo>
                <mi>L</mi>
                <msub>
                  <mi>σ</mi>
                  <mtext>bg</mtext>
                </msub>
                <mo>+</mo>
                <msub>
                  <mi>r</mi>
                  <mtext>bg</mtext>
                </msub>
                <mi>t</mi>
              </math>
              <dl class="inputs">
                <div>
                  <dt>W</dt>
                  <dd>{(point.w * 1e3).toFixed(3)} MeV</dd>
                </div>
                <div>
                  <dt>L, dead time taken off</dt>
                  <dd>{digits(point.luminosity, 5)} nb⁻¹</dd>
                </div>
                <div>
                  <dt>live time t</dt>
                  <dd>{hours(point.time)}</dd>
                </div>
                <div>
                  <dt>efficiency ε</dt>
                  <dd>{sheet.value.detection.efficiency ?? "1"}</dd>
                </div>
              </dl>
              <p class="note">
                The observed cross section is good to {digits(answers.curve.value?.accuracy ?? Number.NaN, 1)} of itself for
                the hypothesis as it stands. The model's own error is not part of this number.
              </p>
            </Why>
          )}
        </dd>
      </div>
      <div>
        <dt>
          <span class="sym">p</span>-value
        </dt>
        <dd>
          {point.p === null ? (
            "–"
          ) : (
            <Why title="p-value of the running point" value={pValue(point.p)}>
              <p>Chance that a count at least as far from the expected one comes about, if the hypothesis is right. Two-sided.</p>
              <math display="block">
                <mtext>pull</mtext>
                <mo>=</mo>
                <Fraction
                  over={
                    <>
                      <mi>n</mi>
                      <mo>−</mo>
                      <mi>μ</mi>
                    </>
                  }
                  under={
                    <msqrt>
                      <mi>μ</mi>
                    </msqrt>
                  }
                />
                {point.pull !== null && (
                  <>
                    <mo>=</mo>
                    <mtext>{signed(point.pull, 2)}</mtext>
                  </>
                )}
              </math>
            </Why>
          )}
        </dd>
      </div>
    </dl>
  );
}
