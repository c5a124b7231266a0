/** Parameters that a fit can leave free: their ids, where they stand in the sheet, how they are written. */
import type { Sheet } from "./types";

/** One parameter of the sheet. */
export interface Parameter {
  id: string;
  /** Path of its text. */
  path: string;
  symbol: string;
  name: string;
}

const STRENGTH = {
  gamma_in_bf: { key: "value", symbol: "Γ_in·B_f", name: "strength" },
  bin_bf: { key: "value", symbol: "B_in·B_f", name: "strength" },
  branchings: { key: "b_in", symbol: "B_in", name: "strength" },
  partial_widths: { key: "gamma_in", symbol: "Γ_in", name: "strength" },
} as const;

/** All parameters of a sheet, in the order of the chain. */
export function parametersOf(sheet: Sheet): Parameter[] {
  const found: Parameter[] = [];
  const several = sheet.model.resonances.length > 1;
  sheet.model.resonances.forEach((resonance, i) => {
    const id = `r${i + 1}`;
    const path = `model.resonances[${i}]`;
    const mark = several ? subscript(i + 1) : "";
    const of = several ? ` of ${resonance.name}` : "";
    const strength = STRENGTH[resonance.strength.kind];
    found.push({ id: `${id}.mass`, path: `${path}.mass`, symbol: `M${mark}`, name: `Mass${of}` });
    found.push({ id: `${id}.width`, path: `${path}.width`, symbol: `Γ${mark}`, name: `Width${of}` });
    found.push({
      id: `${id}.strength`,
      path: `${path}.strength.${strength.key}`,
      symbol: `${strength.symbol}${mark}`,
      name: `Strength${of}`,
    });
    if (i > 0) found.push({ id: `${id}.phase`, path: `${path}.phase`, symbol: `φ${mark}`, name: `Phase${of}` });
  });
  const coherent = sheet.model.coherent;
  if (coherent?.kind === "shared_vertices") {
    found.push({ id: "coherent.0", path: "model.coherent.c", symbol: "C", name: "Coherent background" });
  } else if (coherent?.kind === "one_photon") {
    found.push({ id: "coherent.0", path: "model.coherent.c", symbol: "c", name: "Continuum" });
    found.push({ id: "coherent.phase", path: "model.coherent.phase", symbol: "φ_bg", name: "Phase of the continuum" });
  } else if (coherent?.kind === "polynomial") {
    coherent.coefficients.forEach((_, i) =>
      found.push({
        id: `coherent.${i}`,
        path: `model.coherent.coefficients[${i}]`,
        symbol: `a${subscript(i)}`,
        name: `Coherent background, power ${i}`,
      }),
    );
    found.push({ id: "coherent.phase", path: "model.coherent.phase", symbol: "φ_bg", name: "Phase of the background" });
  }
  const incoherent = sheet.model.incoherent;
  if (incoherent?.kind === "power") {
    found.push({ id: "incoherent.0", path: "model.incoherent.c0", symbol: "c₀", name: "Incoherent background" });
  } else if (incoherent?.kind === "polynomial") {
    incoherent.coefficients.forEach((_, i) =>
      found.push({
        id: `incoherent.${i}`,
        path: `model.incoherent.coefficients[${i}]`,
        symbol: `b${subscript(i)}`,
        name: `Incoherent background, power ${i}`,
      }),
    );
  }
  if (sheet.beam.spread.kind !== "none" && sheet.beam.spread.kind !== "table") {
    found.push({ id: "spread", path: "beam.spread.first", symbol: "σ_W", name: "Spread" });
  }
  if (sheet.detection.background_cross_section) {
    found.push({
      id: "background.cross_section",
      path: "detection.background_cross_section",
      symbol: "σ_bg",
      name: "Background cross section",
    });
  }
  if (sheet.detection.background_rate) {
    found.push({ id: "background.rate", path: "detection.background_rate", symbol: "r_bg", name: "Background rate" });
  }
  return found;
}

/** How a parameter is written; its id where the sheet has no such parameter. */
export function symbolOf(id: string, sheet: Sheet): string {
  return parametersOf(sheet).find((parameter) => parameter.id === id)?.symbol ?? id;
}

function subscript(value: number): string {
  return [...String(value)].map((c) => "₀₁₂₃₄₅₆₇₈₉"[Number(c)] ?? "").join("");
}
