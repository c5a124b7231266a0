/** |Δ| over the complex plane of √s on a chosen sheet, with poles and thresholds. */
import type { JSX } from "preact";
import { ink } from "../lanes/ink";
import { axisScale, digits } from "../format/number";
import { look } from "../state/prefs";
import { frame } from "./frame";
import { kept, Picture, ramp, raster, type Paper } from "./picture";
import { column, line, plane, signs } from "./state";

function draw(paper: Paper): void {
  const answer = plane.value;
  const [values, re, im] = [column(answer, "ln |Delta|"), column(answer, "Re sqrt(s)"), column(answer, "Im sqrt(s)")];
  if (answer === null || values === null || re === null || im === null) return;
  const { columns: nx, rows: ny } = answer;
  const [from, to, low, high] = [re[0] ?? 0, re[nx - 1] ?? 1, im[0] ?? -1, im[ny - 1] ?? 1];
  const { unit } = axisScale(from, to);
  const box = frame(paper, { from, to, name: `Re √s (${unit})`, energy: true }, { from: low, to: high, name: "Im √s (MeV)", energy: true });
  const { root, ctx } = paper;
  const table = ramp([ink("--well", root), ink("--c-observed", root), ink("--ink", root)]);
  // Brightest where a pole is; the ends of the scale are what is usual, so that one pixel next to a pole does not take all of it.
  const bitmap = kept(answer, look.value, () => {
    const sorted = Float64Array.from(values).sort();
    const [dark, bright] = [sorted[Math.floor(sorted.length * 0.02)] ?? 0, sorted[Math.floor(sorted.length * 0.998)] ?? 1];
    const span = bright > dark ? bright - dark : 1;
    return raster(nx, ny, (x, y) => Math.max(0, Math.min(1, ((values[y * nx + x] ?? 0) - dark) / span)), table);
  });
  if (bitmap !== null) ctx.drawImage(bitmap, box.left, box.top, box.width, box.height);
  ctx.save();
  ctx.beginPath();
  ctx.rect(box.left, box.top, box.width, box.height);
  ctx.clip();
  // The real axis; thresholds on it, with the cut to their right.
  ctx.strokeStyle = ink("--ink-2", root);
  ctx.beginPath();
  ctx.moveTo(box.left, box.y(0));
  ctx.lineTo(box.left + box.width, box.y(0));
  ctx.stroke();
  const state = line.value;
  for (const [name, w] of state?.thresholds ?? []) {
    if (w < from || w > to) continue;
    const x = box.x(w);
    ctx.fillStyle = ink("--accent", root);
    ctx.beginPath();
    ctx.moveTo(x, box.y(0) - 6);
    ctx.lineTo(x + 6, box.y(0) + 6);
    ctx.lineTo(x - 6, box.y(0) + 6);
    ctx.fill();
    halo(paper, name, x + 8, box.y(0) - 10);
  }
  const shown = answer.sheet.join();
  for (const pole of state?.poles ?? []) {
    if (pole.sheet.join() !== shown) continue;
    for (const side of [-1, 1]) {
      const [x, y] = [box.x(pole.mass_gev), box.y((side * pole.width_gev) / 2)];
      if (side > 0 && pole.sheet.length === 0) continue;
      ctx.strokeStyle = ink("--bad", root);
      ctx.lineWidth = 2;
      ctx.beginPath();
      ctx.moveTo(x - 6, y - 6);
      ctx.lineTo(x + 6, y + 6);
      ctx.moveTo(x + 6, y - 6);
      ctx.lineTo(x - 6, y + 6);
      ctx.stroke();
    }
  }
  ctx.restore();
}

/** Words that can be read on any colour. */
function halo({ ctx, root }: Paper, text: string, x: number, y: number): void {
  ctx.textAlign = "left";
  ctx.lineWidth = 3;
  ctx.strokeStyle = ink("--paper", root);
  ctx.strokeText(text, x, y);
  ctx.fillStyle = ink("--ink", root);
  ctx.fillText(text, x, y);
}

const height = (width: number): number => Math.min(420, width * 0.86);

/** The picture with the choice of the sheet. */
export function Plane(): JSX.Element {
  const state = line.value;
  const thresholds = state?.thresholds ?? [];
  const now = plane.value?.sheet ?? state?.sheet ?? [];
  return (
    <figure class="pane">
      <figcaption>
        |Δ| over complex energies <span class="quiet">· ✕ poles, ▲ thresholds</span>
      </figcaption>
      <Picture height={height} draw={draw} label={`Complex plane of the energy; ${(state?.poles ?? []).length} poles, ${thresholds.length} thresholds`} />
      {thresholds.length > 0 && (
        <div class="sheet-signs" role="group" aria-label="Sheet">
          {thresholds.map(([name, w], i) => (
            <button
              type="button"
              key={i}
              class="button"
              aria-pressed={now[i] !== false}
              onClick={() => {
                const next = [...now];
                next[i] = now[i] === false;
                signs.value = next;
              }}
            >
              {name || `channel ${i + 1}`} ({digits(w, 5)} GeV): Im q {now[i] === false ? "< 0" : "> 0"}
            </button>
          ))}
          {signs.value !== null && (
            <button type="button" class="link" onClick={() => (signs.value = null)}>
              Next to the real axis
            </button>
          )}
        </div>
      )}
    </figure>
  );
}
