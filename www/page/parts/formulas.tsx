/** What is behind the numbers: formulas as they are implemented, in words, and where they come from. */

/** What is behind a named number. */
export interface Behind {
  /** As `Formula` reads it. */
  formula: string;
  words: string;
  source: string;
  /** How well the number is known beside the sheet's own inputs; absent: as the curve. */
  accuracy?: string;
}

const PDG = "Particle Data Group, Review of Particle Physics, Resonances and Kinematics.";
const DEFINITION = "Definition; its inputs are those of the sheet.";
const ROUNDING = "exact but for rounding";

/** By the name that the worker gives the number, in small letters. */
export const BEHIND: Record<string, Behind> = {
  born: {
    formula: "σ = \\frac{2J+1}{n_a n_b} \\frac{4π}{k^2} |A_{bg} e^{i φ_{bg}} + \\sum e^{i φ_r} v_r (−Δ_r)|^2",
    words: "All resonances of one partial wave and the coherent background are added before they are squared; an incoherent background comes on top.",
    source: PDG,
  },
  radiated: {
    formula: "σ_{rad}(W) = \\int_0^{x_{max}} F(x, W^2) σ(W \\sqrt{1−x}) d x",
    words: "Photons radiated before the collision take the share x of the squared energy; second order, exponentiated, without pair production.",
    source: "Kuraev and Fadin, Sov. J. Nucl. Phys. 41 (1985) 466.",
  },
  observed: {
    formula: "σ_{obs}(W) = \\int G(W′ − W) σ_{rad}(W′) d W′",
    words: "The spread of the beams smears what is left after radiation; G is not renormalised at a threshold.",
    source: "Definition; the spread is the one entered in Beam.",
  },
  rate: {
    formula: "\\frac{d n}{d t} = ℒ (ε B σ_{obs} + σ_{bg}) + r_{bg}",
    words: "Instantaneous luminosity times what the detector would accept, plus background. Background is never radiated.",
    source: DEFINITION,
  },
  "signal rate": { formula: "s = ℒ ε B σ_{obs}", words: "Instantaneous luminosity times what the detector would accept of the signal.", source: DEFINITION },
  "background rate": { formula: "b = ℒ σ_{bg} + r_{bg}", words: "Background that comes with the luminosity, and with time. It is never radiated.", source: DEFINITION, accuracy: ROUNDING },
  "time to 10 % on the signal": {
    formula: "t = \\frac{s + b + b/τ}{s^2 (δ^2 − δ_0^2)}",
    words: "Live time until the signal is known to δ = 10 % by counting, after background is taken off; δ₀ is what scale and energy errors leave whatever the time.",
    source: "Poisson variance of counts in the signal and off regions.",
  },
  "radiation factor": { formula: "1 + δ = \\frac{σ_{rad}(W)}{σ(W)}", words: "What radiation makes of the Born cross section at this W.", source: DEFINITION },
  "spread factor": { formula: "\\frac{σ_{obs}(W)}{σ_{rad}(W)}", words: "What the spread of the beams makes of the radiated cross section at this W.", source: DEFINITION },
  "slope of the observed curve": {
    formula: "\\frac{d σ_{obs}}{d W} = \\frac{σ_{obs}(W+h) − σ_{obs}(W−h)}{2h}",
    words: "Central difference; h is a fiftieth of the spread or of the narrowest width. It tells what an error of the energy does to a count.",
    source: DEFINITION,
    accuracy: "about 10⁻⁴ of itself",
  },
  sigma_w: {
    formula: "σ_W^2 = (\\frac{∂ W}{∂ p_1} σ_{p,1})^2 + (\\frac{∂ W}{∂ p_2} σ_{p,2})^2",
    words: "Spread of the collision energy; given directly where the sheet gives it in W.",
    source: "Propagation of independent Gaussian spreads of the two beams.",
    accuracy: "as the spread entered in Beam is known",
  },
  "to dial": {
    formula: "W = (1 + a) W_{dial} + b",
    words: "Slope a and offset b of the last calibration tie the number on the dial to the true W; W_dial follows from the kind of setting by the kinematics of the two beams.",
    source: "Relativistic kinematics; calibration as entered in Beam.",
    accuracy: "as the calibration is known",
  },
  conversion: {
    formula: "W^2 = m_1^2 + m_2^2 + 2 (E_1 E_2 + p_1 p_2 cos χ)",
    words: "Both beams with their masses; χ is the crossing angle, 0 head-on. The true W is what the calibration makes of it.",
    source: "Relativistic kinematics, Particle Data Group, Review of Particle Physics, Kinematics.",
    accuracy: ROUNDING,
  },
  expected: {
    formula: "μ = L ε B σ_{obs}(W) + L σ_{bg} + r_{bg} t",
    words: "Counts that the hypothesis in Model would have brought by now. The model's own error is not part of this number.",
    source: DEFINITION,
  },
  pull: {
    formula: "pull = \\frac{n − μ}{\\sqrt{μ}}",
    words: "Distance of the count from the expected one in its own standard deviations; for a cross section, in the errors given with it.",
    source: DEFINITION,
  },
  "p-value": {
    formula: "p = 2 min(P(N ≤ n | μ), P(N ≥ n | μ))",
    words: "Chance that a count at least as far from the expected one comes about, if the hypothesis is right. Two-sided, Poisson.",
    source: DEFINITION,
  },
  fitted: {
    formula: "−2 ln L = 2 \\sum (μ_i − n_i + n_i ln \\frac{n_i}{μ_i}) + \\sum \\frac{θ_k^2}{δ_k^2}",
    words: "The values that make this smallest; common energy and scale errors are nuisances θ that move the model. Cross sections enter as squared residuals. The error is where it rises by 1 along its curvature.",
    source: "Baker and Cousins, Nucl. Instrum. Methods 221 (1984) 437.",
    accuracy: "as said with the fit: why it stopped",
  },
  next: {
    formula: "max_t Ψ(I_0 + \\sum t_i I(W_i)), I(W) = \\frac{1}{μ} \\frac{∂ μ}{∂ θ_a} \\frac{∂ μ}{∂ θ_b}",
    words: "Hours t are laid where the information I on the free parameters serves the aim Ψ of the plan best, with what has been measured already (I₀); the timetable then keeps the machine's rules.",
    source: "Kiefer and Wolfowitz, Canad. J. Math. 12 (1960) 363; the guarantee is said in Plan.",
    accuracy: "as guaranteed in Plan",
  },
  threshold: { formula: "W_{thr} = m_1 + m_2", words: "The pair can be made from here on.", source: PDG, accuracy: ROUNDING },
  "break-up momentum": {
    formula: "q = \\frac{\\sqrt{(W^2 − (m_1+m_2)^2)(W^2 − (m_1−m_2)^2)}}{2W}",
    words: "Momentum of each particle where the pair is at rest.",
    source: PDG,
    accuracy: ROUNDING,
  },
  "velocity of the first": { formula: "β = \\frac{q}{\\sqrt{q^2 + m^2}}", words: "In the rest frame of the pair, of the speed of light.", source: PDG, accuracy: ROUNDING },
  "coupling g": {
    formula: "Γ = \\frac{g^2 N M β^p}{8π}, β = \\sqrt{1 − \\frac{4m^2}{M^2}}",
    words: "Decay into a pair of Dirac fermions: p = 3 for a scalar, 1 for a pseudoscalar; N is the colour factor.",
    source: "Tree level, from the squared matrix element of the Yukawa vertex.",
    accuracy: "tree level; exact but for rounding",
  },
  lifetime: { formula: "τ = \\frac{ħ}{Γ}", words: "Mean life of a state of this total width.", source: "ħ of CODATA 2022.", accuracy: ROUNDING },
  "peak, born": {
    formula: "σ_{peak} = \\frac{2J+1}{n_a n_b} \\frac{4π}{k^2} B_{in} B_f",
    words: "Height of one resonance by itself at W = M, before radiation and spread; k is the momentum of each beam in the centre of mass, n the spin states.",
    source: PDG,
    accuracy: ROUNDING,
  },
  "largest by unitarity": { formula: "σ_{max} = \\frac{2J+1}{n_a n_b} \\frac{4π}{k^2}", words: "All the flux of this partial wave goes through the resonance.", source: PDG, accuracy: ROUNDING },
  "time to the events": { formula: "t = \\frac{n}{ℒ ε σ}", words: "Live time until so many events of the signal are expected.", source: DEFINITION, accuracy: ROUNDING },
  "relative error then": { formula: "\\frac{\\sqrt{(s+b) t}}{s t}", words: "By counting alone, with the background known.", source: DEFINITION, accuracy: ROUNDING },
};

const SAME: Record<string, string> = {
  "velocity of the second": "velocity of the first",
  "threshold, to dial": "to dial",
  width: "coupling g",
  "rate of the signal": "signal rate",
  "rate of all": "rate",
  "luminosity for them": "time to the events",
  w: "to dial",
  "true w": "to dial",
  "dw/dp": "sigma_w",
};

/** What is behind a number of this name; a contribution to the Born cross section if it is none of the known. */
export function behind(name: string): Behind {
  const key = name.toLowerCase();
  return BEHIND[SAME[key] ?? key] ?? CONTRIBUTION;
}

const CONTRIBUTION: Behind = {
  formula: "σ = \\frac{2J+1}{n_a n_b} \\frac{4π}{k^2} |A|^2",
  words: "One contribution by itself: the square of one amplitude, or the interference of two. Their sum is the Born cross section.",
  source: PDG,
};
