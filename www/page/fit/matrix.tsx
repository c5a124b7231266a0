/** A covariance that is pasted: one row a line, numbers with their unit. */
import type { JSX } from "preact";
import { useId } from "preact/hooks";
import { problemAt } from "../state/answers";
import { change, sheet } from "../state/sheet";

/** Cells of a line: separated by tabs, commas, semicolons or two spaces; a unit stays with its number. */
export function cellsOf(text: string): string[][] {
  return text
    .split(/\n/)
    .map((line) => line.split(/\t|[,;]|\s{2,}/).map((cell) => cell.trim()).filter((cell) => cell !== ""))
    .filter((row) => row.length > 0);
}

/** Text area of a matrix among the data. */
export function Matrix({ path, label, example }: { path: "data.energy_covariance" | "data.covariance"; label: string; example: string }): JSX.Element {
  const id = useId();
  const key = path === "data.covariance" ? "covariance" : "energy_covariance";
  const rows = sheet.value.data[key] ?? [];
  const problem = problemAt(path);
  return (
    <div class="field field-wide">
      <label for={id}>{label}</label>
      <textarea
        id={id}
        rows={rows.length > 0 ? 6 : 2}
        spellcheck={false}
        placeholder={example}
        aria-invalid={problem ? "true" : undefined}
        aria-describedby={problem ? `${id}p` : undefined}
        defaultValue={rows.map((row) => row.join("  ")).join("\n")}
        onChange={(event) => {
          const cells = cellsOf(event.currentTarget.value);
          change(`paste the ${label.toLowerCase()}`, (before) => ({ ...before, data: { ...before.data, [key]: cells } }));
        }}
      />
      {problem && (
        <p class="problem" id={`${id}p`} role="status">
          {problem.message}
        </p>
      )}
    </div>
  );
}
