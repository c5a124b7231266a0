/** A small plot of a study: lines over two axes. The numbers are in the table beside it; no style attributes (strict CSP). */
import type { JSX } from "preact";
import { digits, fixed } from "../format/number";
import { standalone, TakePlot } from "../parts/take-plot";
import { csvOf, download, fileName } from "../state/files";

/** A line; not finite values are gaps. */
export interface PlotLine {
  x: ArrayLike<number>;
  y: ArrayLike<number>;
  /** Class of its stroke: see style/fit.css. */
  look: "main" | "second" | "faint";
}

interface PlotProps {
  /** One sentence for whoever does not see it. */
  words: string;
  x: string;
  y: string;
  lines: readonly PlotLine[];
  /** Values of y marked by a thin line, with a label. */
  levels?: readonly (readonly [number, string])[];
  /** y begins there instead of at the least value. */
  from?: number;
}

const [WIDTH, HEIGHT, LEFT, RIGHT, TOP, BOTTOM] = [420, 220, 62, 14, 10, 40];

/** The plot. */
export function Plot({ words, x, y, lines, levels = [], from }: PlotProps): JSX.Element | null {
  const xs = span(lines.map((line) => line.x));
  const ys = span([...lines.map((line) => line.y), levels.map(([level]) => level)]);
  if (xs === null || ys === null) return null;
  const [x0, x1] = xs;
  const [y0, y1] = [from ?? ys[0], ys[1]];
  const left = (value: number): number => LEFT + ((value - x0) / (x1 - x0)) * (WIDTH - LEFT - RIGHT);
  const top = (value: number): number => HEIGHT - BOTTOM - ((value - y0) / (y1 - y0)) * (HEIGHT - TOP - BOTTOM);
  return (
    <figure>
      <svg class="plot" viewBox={`0 0 ${WIDTH} ${HEIGHT}`} role="img" aria-label={words}>
        <path class="plot-frame" d={`M${LEFT} ${TOP}V${HEIGHT - BOTTOM}H${WIDTH - RIGHT}`} />
        {ticks(x0, x1, 4).map((value, _i, all) => (
          <text key={value} x={left(value)} y={HEIGHT - BOTTOM + 15} text-anchor="middle">
            {label(value, all)}
          </text>
        ))}
        {ticks(y0, y1, 4).map((value, _i, all) => (
          <text key={value} x={LEFT - 6} y={top(value) + 4} text-anchor="end">
            {label(value, all)}
          </text>
        ))}
        <text x={(LEFT + WIDTH - RIGHT) / 2} y={HEIGHT - 6} text-anchor="middle">
          {x}
        </text>
        <text x={14} y={(TOP + HEIGHT - BOTTOM) / 2} text-anchor="middle" transform={`rotate(-90 14 ${(TOP + HEIGHT - BOTTOM) / 2})`}>
          {y}
        </text>
        {levels.map(([level, name]) => (
          <g key={level}>
            <path class="plot-level" d={`M${LEFT} ${top(level)}H${WIDTH - RIGHT}`} />
            <text x={WIDTH - RIGHT - 2} y={top(level) - 3} text-anchor="end">
              {name}
            </text>
          </g>
        ))}
        {lines.map((line, i) => (
          <path key={i} class={`plot-${line.look}`} d={path(line, left, top)} />
        ))}
      </svg>
      <figcaption class="actions">
        <TakePlot name={x.replace(/[^\p{L}\d]+/gu, "-")} what={words} text={(button) => standalone(button.closest("figure")?.querySelector("svg") as SVGSVGElement)} />
      </figcaption>
    </figure>
  );
}

function path(line: PlotLine, left: (value: number) => number, top: (value: number) => number): string {
  let found = "";
  let down = false;
  for (let i = 0; i < line.x.length; i += 1) {
    const [x, y] = [left(line.x[i] ?? Number.NaN), top(line.y[i] ?? Number.NaN)];
    const seen = Number.isFinite(x) && Number.isFinite(y);
    if (seen) found += `${down ? "L" : "M"}${x.toFixed(1)} ${y.toFixed(1)}`;
    down = seen;
  }
  return found;
}

function span(lists: readonly ArrayLike<number>[]): [number, number] | null {
  let [low, high] = [Infinity, -Infinity];
  for (const list of lists) {
    for (let i = 0; i < list.length; i += 1) {
      const value = list[i] ?? Number.NaN;
      if (!Number.isFinite(value)) continue;
      low = Math.min(low, value);
      high = Math.max(high, value);
    }
  }
  return high > low ? [low, high] : null;
}

/** Round values between two ends; adding 0 turns a negative zero into a plain one. */
export function ticks(from: number, to: number, about: number): number[] {
  const rough = (to - from) / about;
  const power = 10 ** Math.floor(Math.log10(rough));
  const step = ([1, 2, 5, 10].find((factor) => factor * power >= rough) ?? 10) * power;
  const found: number[] = [];
  for (let k = Math.ceil(from / step - 1e-9); k * step <= to + step * 1e-9; k += 1) found.push(k * step + 0);
  return found;
}

function label(value: number, all: readonly number[]): string {
  const step = Math.abs((all[1] ?? 0) - (all[0] ?? 0)) || Math.abs(value) || 1;
  if (step < 1e-4 || Math.abs(value) >= 1e6) return digits(value, 3);
  return fixed(value, Math.max(0, -Math.floor(Math.log10(step) + 1e-9)));
}

/** Columns of numbers as a table behind a fold; at most `most` rows, evenly chosen. */
export function Numbers(props: { name: string; columns: readonly { name: string; unit: string; values: ArrayLike<number> }[]; most?: number; significant?: number }): JSX.Element {
  const length = props.columns[0]?.values.length ?? 0;
  const rows = Math.min(props.most ?? 25, length);
  return (
    <details>
      <summary>{props.name} as a table</summary>
      <div class="table-box table-box-short" tabIndex={0} role="region" aria-label={`${props.name} as a table`}>
        <table class="plain">
          <thead>
            <tr>
              {props.columns.map((column) => (
                <th scope="col" class="number" key={column.name}>
                  {column.name}
                  {column.unit && ` (${column.unit})`}
                </th>
              ))}
            </tr>
          </thead>
          <tbody>
            {Array.from({ length: rows }, (_, row) => {
              const i = Math.round((row * (length - 1)) / Math.max(1, rows - 1));
              return (
                <tr key={i}>
                  {props.columns.map((column, j) => (
                    <td class="number" key={column.name}>
                      {digits(column.values[i] ?? Number.NaN, j === 0 ? 7 : (props.significant ?? 3))}
                    </td>
                  ))}
                </tr>
              );
            })}
          </tbody>
        </table>
      </div>
      <button type="button" class="link" onClick={() => download(fileName(props.name, "csv"), new Blob([csvOf(props.columns)], { type: "text/csv" }))}>
        CSV<span class="unseen"> of {props.name}</span>
      </button>
    </details>
  );
}
