/** Parameters that a fit can leave free: their ids, where they stand in the sheet, how they are written. */
import { kindOf } from "../model/kinds";
import type { Form, Loop, Resonance, Sheet } from "./types";

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
  one_width: { key: "value", symbol: "Γ_in", name: "strength" },
  from_form: null,
} as const;

/** Couplings of a form: its Flatté channels or loops. */
function ownCouplings(id: string, path: string, of: { form: Form; flatte?: Resonance["flatte"]; loops?: readonly Loop[] | undefined }, mark: string): Parameter[] {
  if (of.form === "flatte") {
    return (of.flatte ?? []).map((channel, n) => ({ id: `${id}.g${n + 1}`, path: `${path}.flatte[${n}].g_squared`, symbol: `g²${subscript(n + 1)}${mark}`, name: `Squared coupling to ${channel.name}` }));
  }
  if (of.form !== "dressed") return [];
  return (of.loops ?? []).map((loop, n) => {
    const key = loop.kind === "fermion" ? "g" : "h";
    return { id: `${id}.g${n + 1}`, path: `${path}.loops[${n}].${key}`, symbol: `${key}${subscript(n + 1)}${mark}`, name: `Coupling to ${loop.name}` };
  });
}

function ofDiagrams(sheet: Sheet): Parameter[] {
  const model = sheet.model.diagrams;
  if (!model) return [];
  const outside = model.reaction === "compton" || model.reaction === "pair_to_scalars";
  const other = model.reaction === "pair_to_other_pair" || model.reaction === "other_elastic";
  const several = model.mediators.length > 1;
  return model.mediators.flatMap((mediator, i) => {
    const [id, path] = [`d${i + 1}`, `model.diagrams.mediators[${i}]`];
    const mark = several ? subscript(i + 1) : "";
    const of = ` of ${mediator.name}`;
    const found: Parameter[] = [{ id: `${id}.g`, path: `${path}.g`, symbol: `g${mark}`, name: `Coupling${of}` }];
    if (other) found.push({ id: `${id}.g_other`, path: `${path}.g_other`, symbol: `g_F${mark}`, name: `Coupling to F${of}` });
    if (model.reaction !== "compton") found.push({ id: `${id}.mass`, path: `${path}.mass`, symbol: `M${mark}`, name: `Mass${of}` });
    if (outside) return found;
    if (mediator.form !== "flatte" && mediator.form !== "dressed" && mediator.form !== "free") {
      found.push({ id: `${id}.width`, path: `${path}.width`, symbol: `Γ${mark}`, name: `Width${of}` });
    }
    return [...found, ...ownCouplings(id, path, mediator, mark)];
  });
}

function ofKMatrix(sheet: Sheet): Parameter[] {
  const model = sheet.model.k_matrix;
  if (!model) return [];
  const found: Parameter[] = model.poles.flatMap((_, i) => {
    const [id, path, mark] = [`k${i + 1}`, `model.k_matrix.poles[${i}]`, model.poles.length > 1 ? subscript(i + 1) : ""];
    return [
      { id: `${id}.mass`, path: `${path}.mass`, symbol: `M${mark}`, name: `Mass of bare pole ${i + 1}` },
      { id: `${id}.g1`, path: `${path}.g1`, symbol: `g₁${mark && `,${mark}`}`, name: `Coupling 1 of bare pole ${i + 1}` },
      { id: `${id}.g2`, path: `${path}.g2`, symbol: `g₂${mark && `,${mark}`}`, name: `Coupling 2 of bare pole ${i + 1}` },
    ];
  });
  for (const key of ["c11", "c12", "c22"] as const) {
    if (model[key]) found.push({ id: `k.${key}`, path: `model.k_matrix.${key}`, symbol: `c${subscript(Number(key.slice(1)))}`, name: `Constant ${key} of K` });
  }
  return found;
}

/** All parameters of a sheet, in the order of the chain. */
export function parametersOf(sheet: Sheet): Parameter[] {
  const found: Parameter[] = [];
  const kind = kindOf(sheet);
  const summed = kind === "partial_wave" || kind === "waves";
  const several = sheet.model.resonances.length > 1;
  if (kind === "diagrams") found.push(...ofDiagrams(sheet));
  if (kind === "k_matrix") found.push(...ofKMatrix(sheet));
  const firsts = new Set<number>();
  (summed ? sheet.model.resonances : []).forEach((resonance, i) => {
    const wave = kind === "waves" ? (resonance.wave ?? 1) : 1;
    const first = !firsts.has(wave);
    firsts.add(wave);
    const id = `r${i + 1}`;
    const path = `model.resonances[${i}]`;
    const mark = several ? subscript(i + 1) : "";
    const of = several ? ` of ${resonance.name}` : "";
    const strength = STRENGTH[resonance.strength.kind];
    found.push({ id: `${id}.mass`, path: `${path}.mass`, symbol: `M${mark}`, name: `Mass${of}` });
    if (resonance.form !== "flatte" && resonance.form !== "dressed" && resonance.form !== "free") {
      found.push({ id: `${id}.width`, path: `${path}.width`, symbol: `Γ${mark}`, name: `Width${of}` });
    }
    found.push(...ownCouplings(id, path, resonance, mark));
    if (strength !== null) {
      found.push({
        id: `${id}.strength`,
        path: `${path}.strength.${strength.key}`,
        symbol: `${strength.symbol}${mark}`,
        name: `Strength${of}`,
      });
    }
    if (!first) found.push({ id: `${id}.phase`, path: `${path}.phase`, symbol: `φ${mark}`, name: `Phase${of}` });
  });
  if (kind === "waves") {
    (sheet.model.waves ?? []).forEach((_, i) => {
      if (i > 0) found.push({ id: `w${i + 1}.phase`, path: `model.waves[${i}].phase`, symbol: `φ_w${subscript(i + 1)}`, name: `Phase of wave ${i + 1}` });
    });
  }
  const coherent = summed ? sheet.model.coherent : undefined;
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
  (sheet.channels ?? []).forEach((channel, c) => found.push(...ofChannel(sheet, channel, c)));
  return found;
}

type Channel = NonNullable<Sheet["channels"]>[number];

/** Parameters of a further exit channel that are its own. */
function ofChannel(sheet: Sheet, channel: Channel, c: number): Parameter[] {
  const path = `channels[${c}]`;
  const own = (id: string, at: string, symbol: string, name: string): Parameter => ({
    id: `c${c + 1}.${id}`,
    path: `${path}.${at}`,
    symbol: `${symbol}${subscript(c + 1)}`,
    name: `${name} (${channel.name})`,
  });
  const found: Parameter[] = [];
  const resonances = channel.model?.resonances ?? sheet.model.resonances;
  resonances.forEach((resonance, i) => {
    const kind = resonance.strength.kind;
    const id = kind === "branchings" ? "b_f" : kind === "partial_widths" ? "gamma_f" : "strength";
    const symbol = kind === "branchings" ? "B_f" : kind === "partial_widths" ? "Γ_f" : kind === "bin_bf" ? "B_in·B_f" : "Γ_in·B_f";
    const of = resonances.length > 1 ? ` of ${resonance.name}` : "";
    if (channel.model) {
      const at = `model.resonances[${i}]`;
      found.push(own(`r${i + 1}.mass`, `${at}.mass`, "M", `Mass${of}`), own(`r${i + 1}.width`, `${at}.width`, "Γ", `Width${of}`));
      found.push(own(`r${i + 1}.${id}`, `${at}.strength.${id === "strength" ? "value" : id}`, symbol, `Strength${of}`));
    } else {
      found.push(own(`r${i + 1}.${id}`, `strengths[${i}]`, symbol, `Strength${of}`));
    }
  });
  const coherent = channel.model ? undefined : channel.coherent;
  if (coherent?.kind === "one_photon") {
    found.push(own("coherent.0", "coherent.c", "c", "Continuum"), own("coherent.phase", "coherent.phase", "φ_bg", "Phase of the continuum"));
  }
  if (!channel.model && channel.incoherent?.kind === "power") found.push(own("incoherent.0", "incoherent.c0", "c₀", "Incoherent background"));
  if (channel.detection.background_cross_section) {
    found.push(own("background.cross_section", "detection.background_cross_section", "σ_bg", "Background cross section"));
  }
  if (channel.detection.background_rate) found.push(own("background.rate", "detection.background_rate", "r_bg", "Background rate"));
  return found;
}

/** How a parameter is written; its id where the sheet has no such parameter. */
export function symbolOf(id: string, sheet: Sheet): string {
  return parametersOf(sheet).find((parameter) => parameter.id === id)?.symbol ?? id;
}

function subscript(value: number): string {
  return [...String(value)].map((c) => "₀₁₂₃₄₅₆₇₈₉"[Number(c)] ?? "").join("");
}
