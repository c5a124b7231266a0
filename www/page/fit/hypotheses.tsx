/** Two hypotheses on the same rows: likelihood ratio with its significance; goodness by pseudo-experiments. */
import type { JSX } from "preact";
import { signal } from "@preact/signals";
import type { Comparison } from "../../shared/generated/Comparison";
import { digits, fixed, pValue } from "../format/number";
import { Choice } from "../parts/field";
import { sheet } from "../state/sheet";
import type { Sheet } from "../state/types";
import { ask } from "../state/work";
import { study } from "./study";
import { StudyBar } from "./study-bar";

/** Pseudo-experiments of one comparison: p-values down to 0.005. */
const TRIALS = 200;

interface Other {
  words: string;
  null: Sheet;
  alternative: Sheet;
}

const comparison = study<{ words: string; found: Comparison }>();
const goodness = study<{ p: number; low: number; high: number; trials: number }>();
const chosen = signal("");

/** What the sheet's hypothesis can be compared with; the narrower one is the null. */
export function others(now: Sheet): Record<string, Other> {
  const found: Record<string, Other> = {};
  const { model, fit } = now;
  const last = model.resonances.length;
  const without = (prefix: string): string[] => fit.free.filter((id) => !id.startsWith(prefix));
  if (last > 1) {
    const name = model.resonances.at(-1)?.name ?? "the last resonance";
    found["second"] = {
      words: `with or without ${name}`,
      null: { ...now, model: { ...model, resonances: model.resonances.slice(0, -1) }, fit: { ...fit, free: without(`r${last}.`) } },
      alternative: now,
    };
  }
  const coherent = model.coherent;
  if (coherent?.kind === "one_photon" && !model.incoherent) {
    found["interference"] = {
      words: "with or without interference",
      null: {
        ...now,
        model: { ...model, coherent: null, incoherent: { kind: "power", c0: coherent.c, w0: coherent.w0, n: "2" } },
        fit: { ...fit, free: [...without("coherent."), ...(fit.free.includes("coherent.0") ? ["incoherent.0"] : [])] },
      },
      alternative: now,
    };
  }
  if (coherent) {
    found["background"] = {
      words: "with or without a background inside the modulus",
      null: { ...now, model: { ...model, coherent: null }, fit: { ...fit, free: without("coherent.") } },
      alternative: now,
    };
  }
  const power = model.incoherent;
  if (power?.kind === "power") {
    found["slope"] = {
      words: "background flat or sloping",
      null: { ...now, model: { ...model, incoherent: { kind: "polynomial", w0: power.w0, coefficients: [power.c0] } } },
      alternative: {
        ...now,
        model: { ...model, incoherent: { kind: "polynomial", w0: power.w0, coefficients: [power.c0, "0 nb"] } },
        fit: { ...fit, free: [...new Set([...fit.free, "incoherent.0", "incoherent.1"])] },
      },
    };
  }
  for (const j of ["0", "1", "2"]) {
    if (j !== model.j) found[`j${j}`] = { words: `J = ${model.j} or J = ${j}`, null: { ...now, model: { ...model, j } }, alternative: now };
  }
  return found;
}

function run(other: Other): void {
  void comparison.run(async (_now, options) => {
    const { body } = await ask({ kind: "compare", null: other.null, alternative: other.alternative, trials: TRIALS, seed: 1 }, options);
    if (body.kind !== "comparison") throw new Error("no comparison in the answer");
    return { words: other.words, found: body.comparison };
  });
}

function check(): void {
  void goodness.run(async (now, options) => {
    const { body } = await ask({ kind: "goodness", sheet: now, trials: 2 * TRIALS, seed: 1 }, options);
    if (body.kind !== "goodness") throw new Error("no goodness in the answer");
    const { p_value: p, interval, trials } = body.found;
    return { p, low: interval[0], high: interval[1], trials };
  });
}

/** Choice, buttons and words. */
export function Hypotheses(): JSX.Element {
  const all = others(sheet.value);
  const keys = Object.keys(all);
  const key = keys.includes(chosen.value) ? chosen.value : (keys[0] ?? "");
  const other = all[key];
  const made = comparison.made.value?.value;
  const good = goodness.made.value?.value;
  return (
    <fieldset>
      <legend>Hypotheses</legend>
      <div class="fields">
        <Choice wide label="Compare" value={key} options={keys.map((k) => [k, all[k]?.words ?? k])} onChange={(k) => (chosen.value = k)} />
      </div>
      <StudyBar study={comparison} words="Compare" onRun={() => other && run(other)} disabled={other === undefined} />
      {made && (
        <p class="compared">
          {made.words}: 2 ln of the likelihood ratio {digits(made.found.ratio, 4)}
          {made.found.extra_parameters > 0 && ` for ${made.found.extra_parameters} more parameters`}. {inWords(made.found)}
        </p>
      )}
      <StudyBar study={goodness} words="Goodness by pseudo-experiments" onRun={check} />
      {good && (
        <p class="goodness-trials">
          2 NLL is exceeded in a share of {fixed(good.p, 3)} ({fixed(good.low, 3)} to {fixed(good.high, 3)}) of {good.trials} pseudo-experiments.
        </p>
      )}
    </fieldset>
  );
}

function inWords(found: Comparison): string {
  const significance = found.significance === null ? "" : ` That is ${fixed(found.significance, 1)} standard deviations.`;
  if (found.trials_p === null) return `Wilks' theorem: p ${pValue(found.wilks_p ?? Number.NaN)}.${significance}`;
  const least = found.trials_p <= 1.5 / (found.trials + 1) ? "at most " : "";
  const wilks =
    found.wilks_p === null
      ? "Wilks' theorem does not hold here (a parameter at its limit, or without meaning under the narrower hypothesis)."
      : `Wilks' theorem gives p ${pValue(found.wilks_p)}.`;
  return `${found.trials} pseudo-experiments of the narrower hypothesis: p ${least}${pValue(found.trials_p)}.${significance} ${wilks}`;
}
