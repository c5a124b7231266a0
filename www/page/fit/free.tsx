/** Which parameters a fit leaves free, and what is known of them beforehand. */
import type { JSX } from "preact";
import { Quantity } from "../parts/quantity";
import { Sym } from "../parts/sym";
import * as answers from "../state/answers";
import { parametersOf } from "../state/parameters";
import { textAt } from "../state/path";
import { change, setField, sheet } from "../state/sheet";

/** The table of parameters. */
export function FreeParameters(): JSX.Element {
  const now = sheet.value;
  const { free, constraints = [] } = now.fit;
  return (
    <fieldset>
      <legend>Parameters</legend>
      <table class="plain">
        <thead>
          <tr>
            <th scope="col">Free</th>
            <th scope="col">Parameter</th>
            <th scope="col">Now</th>
            <th scope="col">Known beforehand</th>
          </tr>
        </thead>
        <tbody>
          {parametersOf(now).map((parameter) => {
            const on = free.includes(parameter.id);
            const at = constraints.findIndex((entry) => entry.parameter === parameter.id);
            const known = constraints[at]?.value ?? "";
            const problem = at < 0 ? undefined : answers.problemAt(`fit.constraints[${at}].value`);
            return (
              <tr key={parameter.id}>
                <td>
                  <label class="tick">
                    <input
                      type="checkbox"
                      aria-label={`${parameter.name} free`}
                      checked={on}
                      onChange={() => setField("fit.free", on ? free.filter((id) => id !== parameter.id) : order([...free, parameter.id]), on ? `fix ${parameter.name}` : `free ${parameter.name}`)}
                    />
                  </label>
                </td>
                <th scope="row">
                  <Sym text={parameter.symbol} /> <span class="quiet small">{parameter.name}</span>
                </th>
                <td class="number">
                  <Quantity text={textAt(now, parameter.path)} />
                </td>
                <td>
                  <input
                    type="text"
                    class="cell-input"
                    aria-label={`${parameter.name} known beforehand`}
                    aria-invalid={problem ? "true" : undefined}
                    title={problem?.message ?? ""}
                    value={known}
                    placeholder="nothing"
                    onInput={(event) => constrain(parameter.id, event.currentTarget.value)}
                  />
                </td>
              </tr>
            );
          })}
        </tbody>
      </table>
    </fieldset>
  );
}

function order(ids: string[]): string[] {
  const all = parametersOf(sheet.peek()).map((parameter) => parameter.id);
  return ids.sort((a, b) => all.indexOf(a) - all.indexOf(b));
}

function constrain(id: string, value: string): void {
  change(
    "what is known beforehand",
    (before) => {
      const rest = (before.fit.constraints ?? []).filter((entry) => entry.parameter !== id);
      const constraints = value === "" ? rest : [...rest, { parameter: id, value }];
      return { ...before, fit: { ...before.fit, constraints } };
    },
    `constraint ${id}`,
  );
}
