/** Kinds of hypothesis and what a new one starts from. What a sheet holds of another kind stays in it. */
import { change } from "../state/sheet";
import type { Diagrams, KMatrix, Mediator, ModelKind, Sheet, Wave } from "../state/types";

/** Kinds in the order of how much they say. */
export const KINDS = [
  ["partial_wave", "Resonances in one partial wave"],
  ["waves", "Resonances in several partial waves, with angles"],
  ["k_matrix", "Two-channel K-matrix"],
  ["diagrams", "Tree-level diagrams of a Yukawa coupling"],
] as const satisfies readonly (readonly [ModelKind, string])[];

/** The kind of a sheet's hypothesis. */
export function kindOf(sheet: Sheet): ModelKind {
  return sheet.model.hypothesis ?? "partial_wave";
}

const PION = "139.570 MeV";

function kMatrix(mass: string): KMatrix {
  return {
    poles: [{ mass, g1: "100 MeV", g2: "100 MeV" }],
    channels: [
      { name: "entrance", m1: PION, m2: PION },
      { name: "other", m1: "493.677 MeV", m2: "493.677 MeV" },
    ],
    chew_mandelstam: true,
    entrance: 1,
    exit: 1,
  };
}

/** A mediator to begin with. */
export function newMediator(mass: string, width: string, name = "φ"): Mediator {
  return { name, mass, g: "0.1", g_other: "0.1", form: "constant_width", width: width || "1 MeV" };
}

function diagrams(mass: string, width: string): Diagrams {
  return { reaction: "pair_to_other_pair", other_mass: "105.6583755 MeV", mediators: [newMediator(mass, width)] };
}

/** A wave to begin with: opposite helicities in, two spinless particles out. */
export function newWave(j: string): Wave {
  return {
    j: j || "1",
    entrance: {
      kind: "helicity",
      amplitudes:
        j === "0"
          ? [
              { l1: "1/2", l2: "1/2", magnitude: "1" },
              { l1: "-1/2", l2: "-1/2", magnitude: "1" },
            ]
          : [
              { l1: "1/2", l2: "-1/2", magnitude: "1" },
              { l1: "-1/2", l2: "1/2", magnitude: "1" },
            ],
    },
    exit: { kind: "helicity", amplitudes: [{ l1: "0", l2: "0", magnitude: "1" }] },
  };
}

/** Makes the sheet's hypothesis one of this kind; what is not declared yet begins with what the sheet knows. */
export function choose(kind: ModelKind): void {
  change("kind of hypothesis", (before) => {
    const model = { ...before.model };
    const first = model.resonances[0];
    const [mass, width] = [first?.mass ?? "1 GeV", first?.width ?? ""];
    if (kind === "partial_wave") delete model.hypothesis;
    else model.hypothesis = kind;
    if (kind === "k_matrix" && !model.k_matrix) model.k_matrix = kMatrix(mass);
    if (kind === "diagrams" && !model.diagrams) model.diagrams = diagrams(mass, width);
    if (kind === "waves" && (model.waves ?? []).length === 0) model.waves = [newWave(model.j)];
    // What is left free belongs to the parameters of a kind.
    return { ...before, model, fit: { ...before.fit, free: before.fit.free.filter((id) => !/^([rkdw]\d*|coherent)\./.test(id)) } };
  });
}
