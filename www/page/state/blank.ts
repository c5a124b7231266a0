/** A sheet with nothing in it yet; its empty fields say what belongs there. */
import type { Sheet } from "./types";

/** An empty sheet for two equal beams. */
export function blankSheet(): Sheet {
  return {
    format: "widthwise scan sheet",
    version: 1,
    title: "",
    invented: false,
    note: "",
    beam: {
      arrangement: "equal_beams",
      first: { name: "e-" },
      second: { name: "e+" },
      dial: "total_energy",
      spread: { kind: "none" },
      calibration: {} as Sheet["beam"]["calibration"],
    },
    model: {
      j: "1",
      resonances: [
        { name: "R", mass: "", width: "", strength: { kind: "gamma_in_bf", value: "" }, form: "constant_width" },
      ],
      final_state: "",
      radiation: { on: false },
    },
    detection: {},
    data: { stage: "observed", gaussian_factors: false, rows: [], energy_covariance: [] },
    fit: { free: [] },
    plan: {},
  };
}
