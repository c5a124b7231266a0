/** Where a fitted number comes from: what was minimised, its inputs, and why the fit stopped. */
import type { JSX } from "preact";
import { THIN, withError } from "../format/number";
import { units } from "../parts/quantity";
import { WhyList } from "../parts/why-list";
import type { FitView, ParameterView } from "../state/answers";
import { parametersOf } from "../state/parameters";
import { textAt } from "../state/path";
import { sheet } from "../state/sheet";

/** The inside of its "why". */
export function WhyParameter({ fit, parameter }: { fit: FitView; parameter: ParameterView }): JSX.Element {
  const path = parametersOf(sheet.value).find((entry) => entry.id === parameter.id)?.path ?? "";
  const others = fit.parameters.filter((other) => other.id !== parameter.id).map((other) => other.name);
  const text = withError(parameter.value, parameter.error, { unit: parameter.unit, per: 1 });
  return (
    <WhyList
      of="fitted"
      inputs={[
        ["Fitted", `${text.value}${text.error === "" ? "" : ` ±${THIN}${text.error}`} ${units(parameter.unit)}`],
        ["In the sheet", units(textAt(sheet.value, path)) || "not given"],
        ["Points in use", String(fit.pulls.length)],
        ["Left free with it", others.join(", ") || "nothing else"],
        ["Nuisances that move with it", fit.nuisances.length === 0 ? "none" : `${fit.nuisances.length}, listed in Fit`],
      ]}
    >
      <p class={fit.converged ? "note" : "problem"}>{fit.why}</p>
    </WhyList>
  );
}
