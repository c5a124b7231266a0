/** What must be seen at a glance, from two metres, without a click. */
import type { JSX } from "preact";
import { useLayoutEffect, useRef } from "preact/hooks";
import { WhyParameter } from "../fit/why-parameter";
import { clock, count, hours, signed, THIN, withError } from "../format/number";
import { Quantity } from "../parts/quantity";
import { Sym } from "../parts/sym";
import { Why } from "../parts/why";
import { Explained, WhyList } from "../parts/why-list";
import { Expected, PValue } from "../rooms/health";
import * as answers from "../state/answers";
import { calibration, calibrationAge, needsAttention } from "../state/health";
import { otherSolutions } from "../state/others";
import { accept, hoursLeft, nextFill, nextStop, planned, type PlannedStop } from "../state/plan";
import { room } from "../state/prefs";
import { rows, runningIndex, sheet } from "../state/sheet";

/** The strip. */
export function Strip(): JSX.Element {
  const box = useRef<HTMLElement>(null);
  useLayoutEffect(() => {
    const strip = box.current;
    if (strip === null) return;
    const bar = document.querySelector<HTMLElement>(".bar");
    // What sticks below the strip, and where a focused field may scroll to, depends on its height.
    const measured = new ResizeObserver(() => {
      const above = bar?.offsetHeight ?? 0;
      document.documentElement.style.setProperty("--bar", `${above}px`);
      document.documentElement.style.setProperty("--strip", `${above + strip.offsetHeight}px`);
    });
    measured.observe(strip);
    if (bar !== null) measured.observe(bar);
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
            <Explained
              of="to dial"
              title="The number on the dial"
              inputs={[["True W", wText(here.w)], ...calibration.value]}
              value={<Quantity text={here.dial} />}
            />
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
        {here.expected !== null && (
          <>
            <Expected point={here} /> expected
          </>
        )}
        {here.p !== null && (
          <>
            {" · "}p <PValue point={here} />
          </>
        )}
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
                <Why title={parameter.name} value={<span class="figure">{text.value}</span>}>
                  <WhyParameter fit={fit} parameter={parameter} />
                </Why>
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
      <Others />
    </div>
  );
}

/** Whether the data allow another answer: said beside the numbers, not found out later. */
function Others(): JSX.Element | null {
  const others = otherSolutions.value?.length ?? 0;
  if (others === 0) return null;
  return (
    <p class="note others">
      <button type="button" class="link" onClick={() => (room.value = "fit")}>
        {others === 1 ? "One other solution" : `${others} other solutions`}
      </button>{" "}
      with the same curve
    </p>
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
            <Why title="The next setting" value={<Quantity text={next.dial} />}>
              <WhyList of="next" inputs={whyNext(next)}>
                <p>{next.why}</p>
              </WhyList>
            </Why>
          </p>
          <p class="note">
            <button type="button" class="link" onClick={() => accept(next)}>
              Accept
            </button>{" "}
            {hours(next.hours)} · {next.why}
          </p>
        </>
      )}
    </Cell>
  );
}

function whyNext(next: PlannedStop): [string, string][] {
  return [
    ["True W", wText(next.w)],
    ["Time there", hours(next.hours)],
    ["Counts expected", count(Math.round(next.expected))],
    ["Begins", clock(next.at)],
    ["Fill", String(next.fill)],
    ["Hours of the plan", sheet.value.plan.hours ?? "not entered"],
  ];
}

function Left(): JSX.Element {
  const left = sheet.value.plan.hours;
  const counted = hoursLeft.value;
  const fill = nextFill.value;
  return (
    <Cell name="Beam time left" kind="cell-left">
      <p class="figure">{counted !== null ? hours(counted) : left ? <Quantity text={left} /> : <span class="quiet">–</span>}</p>
      <p class="note">
        {left === undefined || left === "" ? (
          <button type="button" class="link" onClick={() => (room.value = "plan")}>
            Enter it
          </button>
        ) : fill !== null ? (
          `next fill at ${clock(fill)}`
        ) : sheet.value.plan.fill ? (
          <>
            fills of <Quantity text={sheet.value.plan.fill} />
          </>
        ) : (
          "no fills"
        )}
      </p>
    </Cell>
  );
}
