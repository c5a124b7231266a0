/** What must be seen at a glance, from two metres, without a click. */
import type { JSX } from "preact";
import { useLayoutEffect, useRef } from "preact/hooks";
import { count, hours, pValue, signed, THIN, withError } from "../format/number";
import { Quantity } from "../parts/quantity";
import { Sym } from "../parts/sym";
import * as answers from "../state/answers";
import { calibrationAge, needsAttention } from "../state/health";
import { nextStop, planned } from "../state/plan";
import { room } from "../state/prefs";
import { rows, runningIndex, sheet } from "../state/sheet";

/** The strip. */
export function Strip(): JSX.Element {
  const box = useRef<HTMLElement>(null);
  useLayoutEffect(() => {
    const strip = box.current;
    if (strip === null) return;
    // What sticks below the strip, and where a focused field may scroll to, depends on its height.
    const measured = new ResizeObserver(() => {
      document.documentElement.style.setProperty("--strip", `${strip.offsetHeight}px`);
    });
    measured.observe(strip);
    return () => measured.disconnect();
  }, []);
  return (
    <section class="strip" aria-label="At a glance" ref={box}>
      <Dial />
      <Running />
      <Results />
      <Next />
      <Left />
    </section>
  );
}

function Cell(props: { name: string; children: preact.ComponentChildren; kind?: string }): JSX.Element {
  return (
    <div class={`cell ${props.kind ?? ""}`}>
      <h2>{props.name}</h2>
      {props.children}
    </div>
  );
}

function Dial(): JSX.Element {
  const running = answers.runningPoint.value;
  const last = answers.points.value.at(-1) ?? null;
  const here = running ?? last;
  const age = calibrationAge.value;
  return (
    <Cell name={running === null && last !== null ? "Last on the dial" : "On the dial"} kind="cell-dial">
      {here === null ? (
        <p class="figure quiet">–</p>
      ) : (
        <>
          <p class="figure">
            <Quantity text={here.dial} />
          </p>
          <p class="note">
            <span class="sym">W</span> <Quantity text={wText(here.w)} />
            <br />
            {age}
          </p>
        </>
      )}
    </Cell>
  );
}

function wText(w: number): string {
  return w < 12 ? `${(w * 1e3).toFixed(2)} MeV` : `${w.toFixed(4)} GeV`;
}

function Running(): JSX.Element {
  const here = answers.runningPoint.value;
  if (here === null) {
    return (
      <Cell name="Running point">
        <p class="figure quiet">none</p>
        <p class="note">
          <button type="button" class="link" onClick={() => (room.value = "shift")}>
            Start one
          </button>
        </p>
      </Cell>
    );
  }
  const row = rows.value[runningIndex.value];
  return (
    <Cell name={`Running, ${here.id}`} kind={needsAttention.value.some((note) => note.code === "p-value") ? "cell-warn" : ""}>
      <p class="figure">
        <button type="button" class="why" onClick={goToEntry}>
          {here.seen === null ? "–" : count(here.seen)}
          <span class="unseen">, enter counts and luminosity</span>
        </button>
        <span class="beside"> seen</span>
      </p>
      <p class="note">
        {here.expected !== null && <>{count(here.expected)} expected</>}
        {here.p !== null && <> · p {pValue(here.p)}</>}
        <br />
        {row?.luminosity ? (
          <>
            <span class="sym">L</span> <Quantity text={row.luminosity} />
          </>
        ) : (
          "no luminosity yet"
        )}
        {timeLeft(here.w, here.time)}
      </p>
    </Cell>
  );
}

/** One tap from the strip to the two numbers. */
function goToEntry(): void {
  room.value = "shift";
  requestAnimationFrame(() => {
    const field = document.querySelector<HTMLInputElement>(".entry input[name=n]");
    field?.focus();
    field?.select();
    field?.scrollIntoView({ block: "center" });
  });
}

/** Time left of the running point, if the plan has a stop where it stands. */
function timeLeft(w: number, done: number): string {
  const stop = planned.value.find((entry) => Math.abs(entry.w - w) <= SAME_PLACE * w);
  if (stop === undefined || !(stop.hours > done)) return "";
  return ` · ${hours(stop.hours - done)} left`;
}

/** Two energies closer than this, relative, are one setting. */
const SAME_PLACE = 2e-6;

/** At most three results: mass, width, strength of the first resonance, or whatever is free first. */
function Results(): JSX.Element {
  const fit = answers.fit.value;
  if (fit === null) {
    return (
      <Cell name="Result">
        <p class="figure quiet">{answers.fitting.value ? "…" : "–"}</p>
        <p class="note">{answers.fitRefused.value || "Choose in Fit what is left free."}</p>
      </Cell>
    );
  }
  const before = answers.fitBefore.value;
  const shown = fit.parameters.slice(0, 3);
  return (
    <div class="cell cell-results" aria-busy={answers.fitting.value}>
      <h2 class="unseen">Results</h2>
      <dl>
        {shown.map((parameter) => {
          const text = withError(parameter.value, parameter.error, { unit: parameter.unit, per: 1 });
          const old = before?.parameters.find((entry) => entry.id === parameter.id);
          const moved = old === undefined || parameter.error === null ? null : (parameter.value - old.value) / parameter.error;
          return (
            <div key={parameter.id}>
              <dt>
                <Sym text={parameter.symbol} />
              </dt>
              <dd>
                <button type="button" class="why" onClick={() => (room.value = "fit")}>
                  <span class="figure">{text.value}</span>
                  <span class="unseen">, {parameter.name}: open the fit</span>
                </button>
                <span class="unit"> {parameter.unit}</span>
                <p class="note">
                  {text.error === "" ? "no error" : `±${THIN}${text.error}`}
                  {moved !== null && Math.abs(moved) >= 0.05 && <> · moved {signed(moved, 1)} σ</>}
                </p>
              </dd>
            </div>
          );
        })}
      </dl>
    </div>
  );
}

function Next(): JSX.Element {
  const next = nextStop.value;
  return (
    <Cell name="Next setting" kind="cell-next">
      {next === null ? (
        <>
          <p class="figure quiet">–</p>
          <p class="note">
            <button type="button" class="link" onClick={() => (room.value = "plan")}>
              Ask the plan
            </button>
          </p>
        </>
      ) : (
        <>
          <p class="figure">
            <Quantity text={next.dial} />
          </p>
          <p class="note">
            {hours(next.hours)} · {next.why}
          </p>
        </>
      )}
    </Cell>
  );
}

function Left(): JSX.Element {
  const left = sheet.value.plan.hours;
  return (
    <Cell name="Beam time left" kind="cell-left">
      <p class="figure">{left ? <Quantity text={left} /> : <span class="quiet">–</span>}</p>
      <p class="note">{left ? "as entered in Plan" : "Enter it in Plan."}</p>
    </Cell>
  );
}
