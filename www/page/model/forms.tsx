/** What a propagator is made of: width channels, Flatté channels, daughters, loops; for resonances and mediators. */
import type { JSX } from "preact";
import { Choice, Field, Switch } from "../parts/field";
import { around, Slider } from "../parts/slider";
import { change, setField } from "../state/sheet";
import { withAt } from "../state/path";
import type { Channel, FlatteChannel, Form, Loop, Resonance, Shape } from "../state/types";

/** Forms in words. */
export const FORMS = [
  ["constant_width", "Constant width"],
  ["massless_channels", "Massless channels, Γ·s/M²"],
  ["running_width", "Running width"],
  ["flatte", "Two channels near a threshold (Flatté)"],
  ["gounaris_sakurai", "Gounaris–Sakurai"],
  ["dressed", "Dressed by loops"],
  ["free", "Free, 1/(s − M²)"],
] as const satisfies readonly (readonly [Form, string])[];

/** Whether the width follows from couplings. */
export function widthFollows(form: Form): boolean {
  return form === "flatte" || form === "dressed" || form === "free";
}

const PION = "139.570 MeV";
const KAON = "493.677 MeV";

function flatteDefault(): FlatteChannel[] {
  return [
    { name: "ππ", g_squared: "0.165 GeV^2", m1: PION, m2: PION },
    { name: "KK", g_squared: "0.695 GeV^2", m1: KAON, m2: KAON },
  ];
}

/** A loop to begin with. */
export function newLoop(kind: Loop["kind"]): Loop {
  return kind === "fermion"
    ? { kind, name: "f", g: "0.1", mass: "105.6583755 MeV" }
    : { kind, name: "χχ", h: "100 MeV", m1: PION, m2: PION, identical: false };
}

/** What a form needs that is not there yet, and vertices and strength that go with it. */
function withForm<T extends Pick<Resonance, "flatte" | "loops" | "daughter" | "channels">>(of: T, form: Form): T & { form: Form } {
  const next: T & { form: Form } = { ...of, form };
  if (form === "flatte" && (of.flatte ?? []).length !== 2) next.flatte = flatteDefault();
  if (form === "gounaris_sakurai" && !of.daughter) next.daughter = PION;
  if (form === "running_width" && (of.channels ?? []).length === 0) next.channels = [{ name: "channel 1", fraction: "100 %", shape: { kind: "two_body", m1: PION, m2: PION, l: 1 } }];
  return next;
}

/** Gives a resonance another form. */
export function chooseForm(path: string, resonance: Resonance, form: Form): void {
  const own = form === "flatte" || form === "dressed";
  const next: Resonance = withForm(resonance, form);
  if (form === "dressed" && (resonance.loops ?? []).length === 0) next.loops = [newLoop("fermion")];
  if (own) {
    next.entrance = { kind: "own", channel: 1 };
    next.exit = { kind: "own", channel: form === "flatte" ? 2 : 1 };
    next.strength = { kind: "from_form" };
  } else if (resonance.strength.kind === "from_form" || resonance.strength.kind === "one_width") {
    delete next.entrance;
    delete next.exit;
    next.strength = { kind: "gamma_in_bf", value: "1 eV" };
  }
  if (!widthFollows(form) && !resonance.width) next.width = "1 MeV";
  change(`form of ${resonance.name}`, (before) => withAt(before, path, next));
}

/** Gives a mediator another form. */
export function mediatorForm<T extends Pick<Resonance, "flatte" | "loops" | "daughter" | "channels"> & { width?: string | null | undefined }>(path: string, of: T, form: Form): void {
  const next = withForm(of, form);
  if (!widthFollows(form) && !of.width) next.width = "1 MeV";
  change("form of a mediator", (before) => withAt(before, path, next));
}

interface Owner {
  form: Form;
  channels?: readonly Channel[] | undefined;
  flatte?: readonly FlatteChannel[] | undefined;
  loops?: readonly Loop[] | undefined;
  pseudoscalar?: boolean | undefined;
}

/** The fields that belong to a form. `own`: the loops of a mediator come beside those of its couplings. */
export function FormFields({ path, of, further }: { path: string; of: Owner; further?: boolean }): JSX.Element | null {
  switch (of.form) {
    case "running_width":
      return <Channels path={`${path}.channels`} list={of.channels ?? []} />;
    case "flatte":
      return <Flatte path={`${path}.flatte`} list={of.flatte ?? []} />;
    case "gounaris_sakurai":
      return (
        <div class="fields">
          <Field path={`${path}.daughter`} label="Mass of each daughter" example={PION} />
        </div>
      );
    case "dressed":
      return <Loops path={`${path}.loops`} list={of.loops ?? []} further={further === true} />;
    default:
      return null;
  }
}

function Flatte({ path, list }: { path: string; list: readonly FlatteChannel[] }): JSX.Element {
  return (
    <div class="channels">
      <h3>The two channels</h3>
      {list.map((channel, i) => (
        <div class="fields channel" key={i}>
          <Field path={`${path}[${i}].name`} label="Channel" />
          <div class="with-slider">
            <Field path={`${path}[${i}].g_squared`} label="g²" name={`squared coupling to ${channel.name}`} example="0.2 GeV^2" />
            <Slider path={`${path}[${i}].g_squared`} name={`Squared coupling to ${channel.name}`} reach={around(5)} />
          </div>
          <Field path={`${path}[${i}].m1`} label="Mass 1" />
          <Field path={`${path}[${i}].m2`} label="Mass 2" />
        </div>
      ))}
    </div>
  );
}

function Loops({ path, list, further }: { path: string; list: readonly Loop[]; further: boolean }): JSX.Element {
  return (
    <div class="channels">
      <h3>{further ? "Further loops, beside those of f and F" : "Loops"}</h3>
      {list.map((of, i) => {
        const here = `${path}[${i}]`;
        const key = of.kind === "fermion" ? "g" : "h";
        return (
          <div class="fields channel" key={i}>
            <Field path={`${here}.name`} label="Loop of" />
            <div class="with-slider">
              <Field path={`${here}.${key}`} label={<span class="sym">{key}</span>} name={`coupling to ${of.name}`} />
              <Slider path={`${here}.${key}`} name={`Coupling to ${of.name}`} reach={around(5)} />
            </div>
            {of.kind === "fermion" ? (
              <>
                <Field path={`${here}.mass`} label="Mass" />
                <Choice label="Colours" value={String(of.colours ?? 1)} options={[["1", "1"], ["3", "3"]]} onChange={(n) => setField(`${here}.colours`, n === "1" ? undefined : Number(n), "colour factor")} />
              </>
            ) : (
              <>
                <Field path={`${here}.m1`} label="Mass 1" />
                <Field path={`${here}.m2`} label="Mass 2" />
                <div class="field">
                  <Switch label="One real field twice" on={of.identical} onChange={(on) => setField(`${here}.identical`, on, "identical particles")} />
                </div>
              </>
            )}
            <div class="field field-buttons">
              <button type="button" class="link" onClick={() => setField(path, list.filter((_, j) => j !== i), "remove a loop")}>
                Remove the loop of {of.name || i + 1}
              </button>
            </div>
          </div>
        );
      })}
      <div class="buttons">
        <button type="button" class="button" onClick={() => setField(path, [...list, newLoop("fermion")], "add a loop")}>
          Add a fermion loop
        </button>
        <button type="button" class="button" onClick={() => setField(path, [...list, newLoop("scalar")], "add a loop")}>
          Add a scalar loop
        </button>
      </div>
    </div>
  );
}

const SHAPES = [
  ["constant", "Constant"],
  ["massless", "Massless, s/M²"],
  ["two_body", "Two bodies"],
  ["tabulated", "Tabulated"],
] as const satisfies readonly (readonly [Shape["kind"], string])[];

/** Masses, orbital momentum and barrier of two daughters. */
export function TwoBodies({ path, l }: { path: string; l: number }): JSX.Element {
  return (
    <>
      <Field path={`${path}.m1`} label="Mass 1" />
      <Field path={`${path}.m2`} label="Mass 2" />
      <Choice label="Orbital momentum l" value={String(l)} options={["0", "1", "2", "3", "4"].map((n) => [n, n] as const)} onChange={(value) => setField(`${path}.l`, Number(value), "orbital momentum")} />
      <Field optional path={`${path}.radius`} label="Barrier radius" example="none" />
    </>
  );
}

function Channels({ path, list }: { path: string; list: readonly Channel[] }): JSX.Element {
  const make: Record<Shape["kind"], () => Shape> = {
    constant: () => ({ kind: "constant" }),
    massless: () => ({ kind: "massless" }),
    two_body: () => ({ kind: "two_body", m1: PION, m2: PION, l: 1 }),
    tabulated: () => ({ kind: "tabulated", rows: [] }),
  };
  return (
    <div class="channels">
      <h3>Width channels</h3>
      {list.map((channel, i) => (
        <div class="fields channel" key={i}>
          <Field path={`${path}[${i}].name`} label="Channel" />
          <Field path={`${path}[${i}].fraction`} label="Share of Γ at M" example="50 %" />
          <Choice label="Runs as" value={channel.shape.kind} options={SHAPES} onChange={(kind) => setField(`${path}[${i}].shape`, make[kind](), "shape of a channel")} />
          {channel.shape.kind === "two_body" && <TwoBodies path={`${path}[${i}].shape`} l={channel.shape.l} />}
          {channel.shape.kind === "tabulated" && <TableRows path={`${path}[${i}].shape.rows`} rows={channel.shape.rows} />}
          <div class="field field-buttons">
            <button type="button" class="link" onClick={() => setField(path, list.filter((_, j) => j !== i), "remove a channel")}>
              Remove {channel.name || `channel ${i + 1}`}
            </button>
          </div>
        </div>
      ))}
      <button type="button" class="button" onClick={() => setField(path, [...list, { name: `channel ${list.length + 1}`, fraction: list.length === 0 ? "100 %" : "0 %", shape: { kind: "constant" } } satisfies Channel], "add a channel")}>
        Add a channel
      </button>
    </div>
  );
}

/** A tabulated width as lines of text: energy, ratio. */
function TableRows({ path, rows }: { path: string; rows: readonly (readonly [string, string])[] }): JSX.Element {
  return (
    <div class="field field-wide">
      <label>
        Rows: <span class="sym">W</span>, Γ(W)/Γ(M)
        <textarea
          rows={5}
          spellcheck={false}
          data-path={path}
          placeholder={"0.80 GeV, 0.2\n1.10 GeV, 1.6"}
          value={rows.map(([w, ratio]) => `${w}, ${ratio}`).join("\n")}
          onChange={(event) => {
            const lines = event.currentTarget.value.split("\n").filter((line) => line.trim() !== "");
            const read = lines.map((line) => {
              const [w = "", ratio = ""] = line.split(/[,;\t]/);
              return [w.trim(), ratio.trim()];
            });
            setField(path, read, "tabulated width");
          }}
        />
      </label>
    </div>
  );
}
