/** Formulas behind the numbers at the cursor, as they are implemented; sources beside each. */
import type { ComponentChildren, JSX } from "preact";
import { Fraction } from "./why";

/** What is behind a named number. */
export interface Behind {
  formula: JSX.Element;
  words: string;
  source: string;
}

function Sub({ of, low }: { of: string; low: string }): JSX.Element {
  return (
    <msub>
      <mi>{of}</mi>
      <mtext>{low}</mtext>
    </msub>
  );
}

function Line({ children }: { children: ComponentChildren }): JSX.Element {
  return (
    <math display="block">
      <mrow>{children}</mrow>
    </math>
  );
}

/** By the name that the worker gives the number; the names are those of the columns of a curve. */
export const BEHIND: Record<string, Behind> = {
  born: {
    formula: (
      <Line>
        <mi>σ</mi>
        <mo>=</mo>
        <Fraction
          over={<><mn>2</mn><mi>J</mi><mo>+</mo><mn>1</mn></>}
          under={<><msub><mi>n</mi><mi>a</mi></msub><msub><mi>n</mi><mi>b</mi></msub></>}
        />
        <Fraction over={<><mn>4</mn><mi>π</mi></>} under={<msup><mi>k</mi><mn>2</mn></msup>} />
        <msup>
          <mrow>
            <mo>|</mo>
            <Sub of="A" low="bg" />
            <msup><mi>e</mi><mrow><mi>i</mi><Sub of="φ" low="bg" /></mrow></msup>
            <mo>+</mo>
            <munder><mo>∑</mo><mi>r</mi></munder>
            <msup><mi>e</mi><mrow><mi>i</mi><msub><mi>φ</mi><mi>r</mi></msub></mrow></msup>
            <msub><mi>v</mi><mi>r</mi></msub>
            <mo>(</mo><mo>−</mo><msub><mi>Δ</mi><mi>r</mi></msub><mo>)</mo>
            <mo>|</mo>
          </mrow>
          <mn>2</mn>
        </msup>
      </Line>
    ),
    words: "All resonances of one partial wave and the coherent background are added before they are squared; an incoherent background comes on top.",
    source: "Particle Data Group, Review of Particle Physics, Resonances and Kinematics.",
  },
  radiated: {
    formula: (
      <Line>
        <Sub of="σ" low="rad" />
        <mo>(</mo><mi>W</mi><mo>)</mo>
        <mo>=</mo>
        <msubsup><mo>∫</mo><mn>0</mn><Sub of="x" low="max" /></msubsup>
        <mi>F</mi><mo>(</mo><mi>x</mi><mo>,</mo><msup><mi>W</mi><mn>2</mn></msup><mo>)</mo>
        <mi>σ</mi><mo>(</mo><mi>W</mi><msqrt><mn>1</mn><mo>−</mo><mi>x</mi></msqrt><mo>)</mo>
        <mi>d</mi><mi>x</mi>
      </Line>
    ),
    words: "Photons radiated before the collision take the share x of the squared energy; second order, exponentiated, without pair production.",
    source: "Kuraev and Fadin, Sov. J. Nucl. Phys. 41 (1985) 466.",
  },
  observed: {
    formula: (
      <Line>
        <Sub of="σ" low="obs" />
        <mo>(</mo><mi>W</mi><mo>)</mo>
        <mo>=</mo>
        <mo>∫</mo>
        <mi>G</mi><mo>(</mo><msup><mi>W</mi><mo>′</mo></msup><mo>−</mo><mi>W</mi><mo>)</mo>
        <Sub of="σ" low="rad" />
        <mo>(</mo><msup><mi>W</mi><mo>′</mo></msup><mo>)</mo>
        <mi>d</mi><msup><mi>W</mi><mo>′</mo></msup>
      </Line>
    ),
    words: "The spread of the beams smears what is left after radiation; G is not renormalised at a threshold.",
    source: "Definition; the spread is the one entered in Beam.",
  },
  rate: {
    formula: (
      <Line>
        <Fraction over={<><mi>d</mi><mi>n</mi></>} under={<><mi>d</mi><mi>t</mi></>} />
        <mo>=</mo>
        <mi>ℒ</mi>
        <mo>(</mo><mi>ε</mi><mi>B</mi><Sub of="σ" low="obs" /><mo>+</mo><Sub of="σ" low="bg" /><mo>)</mo>
        <mo>+</mo>
        <Sub of="r" low="bg" />
      </Line>
    ),
    words: "Instantaneous luminosity times what the detector would accept, plus background. Background is never radiated.",
    source: "Definition; inputs are in Beam and Detection.",
  },
};
