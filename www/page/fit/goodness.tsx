/** Formulas behind a fit's numbers. */
import type { JSX } from "preact";
import { digits, pValue } from "../format/number";
import { Fraction, Why } from "../parts/why";
import type { FitView } from "../state/answers";

/** Where an error of a fit comes from. */
export function Covariance(): JSX.Element {
  return (
    <>
      <math display="block">
        <mrow>
          <mi>V</mi>
          <mo>=</mo>
          <mn>2</mn>
          <msup>
            <mi>H</mi>
            <mrow>
              <mo>−</mo>
              <mn>1</mn>
            </mrow>
          </msup>
          <mo>,</mo>
          <msub>
            <mi>H</mi>
            <mrow>
              <mi>i</mi>
              <mi>j</mi>
            </mrow>
          </msub>
          <mo>=</mo>
          <Fraction over={<><msup><mo>∂</mo><mn>2</mn></msup><mo>(</mo><mn>2</mn><mtext>NLL</mtext><mo>)</mo></>} under={<><mo>∂</mo><msub><mi>θ</mi><mi>i</mi></msub><mo>∂</mo><msub><mi>θ</mi><mi>j</mi></msub></>} />
        </mrow>
      </math>
      <p>
        The value is where the likelihood of all points in use, with constraints and nuisances, is largest. The error is the
        curvature there: it holds where the likelihood is close to a parabola.
      </p>
    </>
  );
}

/** chi2 over degrees of freedom, and the p-value. */
export function Goodness({ fit }: { fit: FitView }): JSX.Element {
  return (
    <p class="goodness">
      <Why
        title="Goodness of fit"
        value={
          <>
            <span class="sym">χ²</span> {digits(fit.statistic, 4)} / {fit.degrees}
          </>
        }
      >
        <math display="block">
          <mrow>
            <mn>2</mn>
            <munder>
              <mo>∑</mo>
              <mi>j</mi>
            </munder>
            <mrow>
              <mo>[</mo>
              <msub>
                <mi>μ</mi>
                <mi>j</mi>
              </msub>
              <mo>−</mo>
              <msub>
                <mi>n</mi>
                <mi>j</mi>
              </msub>
              <mo>+</mo>
              <msub>
                <mi>n</mi>
                <mi>j</mi>
              </msub>
              <mi>ln</mi>
              <Fraction over={<><msub><mi>n</mi><mi>j</mi></msub></>} under={<><msub><mi>μ</mi><mi>j</mi></msub></>} />
              <mo>]</mo>
            </mrow>
          </mrow>
        </math>
        <p>
          For counts; for cross sections the squared residuals weighted by the inverse covariance. Constraints and nuisances
          add their squared pulls.
        </p>
        <p class="note">Baker and Cousins, Nucl. Instrum. Methods 221 (1984) 437.</p>
      </Why>
      {fit.p !== null && (
        <>
          {" "}
          · p {pValue(fit.p)}
          {!fit.pHolds && <span class="note"> (counts are low: only a guide)</span>}
        </>
      )}
    </p>
  );
}
