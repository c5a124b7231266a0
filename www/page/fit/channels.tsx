/** Further exit channels fitted together: their strengths, what lies between them and their counts, and the counts. */
import type { JSX } from "preact";
import { Field } from "../parts/field";
import { addRow, setCell } from "../state/rows";
import { change, sheet } from "../state/sheet";
import type { Row, Sheet, Strength } from "../state/types";

type Channel = NonNullable<Sheet["channels"]>[number];

/** What of a strength belongs to the exit. */
export function exitStrength(strength: Strength): { text: string; label: string } {
  if (strength.kind === "branchings") return { text: strength.b_f, label: "Bf" };
  if (strength.kind === "partial_widths") return { text: strength.gamma_f, label: "Γf" };
  if ("value" in strength) return { text: strength.value, label: strength.kind === "bin_bf" ? "Bin · Bf" : "Γin · Bf" };
  return { text: "", label: "strength" };
}

function fresh(taken: readonly Channel[], stem: string): string {
  for (let n = 1; ; n += 1) {
    const name = n === 1 ? stem : `${stem} ${n}`;
    if (!taken.some((channel) => channel.name === name)) return name;
  }
}

function add(thermometer: boolean): void {
  change(thermometer ? "add a thermometer" : "add a channel", (before) => {
    const { model, detection, channels = [] } = before;
    const own = { ...(detection.efficiency ? { efficiency: detection.efficiency } : {}), ...(detection.background_rate ? { background_rate: detection.background_rate } : {}) };
    const first = model.resonances[0];
    const channel: Channel = thermometer
      ? { name: fresh(channels, "thermometer"), model: { ...model, resonances: first ? [{ ...first, name: "known peak" }] : [], coherent: null, final_state: "" }, detection: own }
      : {
          name: fresh(channels, "channel B"),
          strengths: model.resonances.map((resonance) => exitStrength(resonance.strength).text),
          coherent: model.coherent ?? null,
          incoherent: model.incoherent ?? null,
          final_threshold: model.final_threshold ?? null,
          detection: own,
        };
    return { ...before, channels: [...channels, channel] };
  });
}

function remove(index: number, name: string): void {
  change(`remove the channel ${name}`, (before) => {
    const channels = (before.channels ?? []).filter((_, i) => i !== index);
    const rows = before.data.rows.filter((row) => row.channel !== name);
    const free = before.fit.free.filter((id) => !id.startsWith("c") || !/^c\d+\./.test(id));
    return { ...before, channels, data: { ...before.data, rows }, fit: { ...before.fit, free } };
  });
}

/** Fields, counts and buttons. */
export function Channels(): JSX.Element {
  const channels = sheet.value.channels ?? [];
  return (
    <fieldset>
      <legend>Exit channels fitted together</legend>
      <p class="note">
        Channels of the same resonances share mass, width, entrance and spread; strength, backgrounds and efficiency are their
        own. A thermometer is a known narrow peak, scanned for the energy offset and the spread. Rows of several channels at one
        setting, fill and start are one visit: they share its energy and luminosity error.
      </p>
      {channels.map((channel, i) => (
        <One channel={channel} index={i} key={i} />
      ))}
      <p class="actions">
        <button type="button" class="button" onClick={() => add(false)}>
          Add an exit channel
        </button>
        <button type="button" class="button" onClick={() => add(true)}>
          Add a thermometer
        </button>
        <button type="button" class="button" onClick={apart}>
          Add a run with the beams apart
        </button>
      </p>
    </fieldset>
  );
}

function apart(): void {
  const last = sheet.peek().data.rows.at(-1);
  addRow({ ...(last?.setting ? { setting: last.setting } : {}), ...(last?.w ? { w: last.w } : {}), beams_apart: true, live_time: "1 h", counts: "0", comment: "beams apart" }, false);
}

function One({ channel, index }: { channel: Channel; index: number }): JSX.Element {
  const path = `channels[${index}]`;
  const own = channel.model?.resonances[0];
  const strength = own && exitStrength(own.strength);
  return (
    <fieldset>
      <legend>{channel.name || `channel ${index + 1}`}</legend>
      <div class="fields">
        <Field path={`${path}.name`} label="Name" />
        {own
          ? [
              <Field path={`${path}.model.resonances[0].mass`} label="Known mass" key="m" />,
              <Field path={`${path}.model.resonances[0].width`} label="Known width" key="w" />,
              <Field path={`${path}.model.resonances[0].strength.value`} label={strength?.label ?? "Strength"} key="s" />,
              <Field optional path={`${path}.model.radiation.w_min`} label="Least W after radiation" key="r" />,
            ]
          : sheet.value.model.resonances.map((resonance, k) => (
              <Field path={`${path}.strengths[${k}]`} label={`${exitStrength(resonance.strength).label} of ${resonance.name}`} key={k} />
            ))}
        {channel.coherent?.kind === "one_photon" && [<Field path={`${path}.coherent.c`} label="Continuum" key="c" />, <Field path={`${path}.coherent.phase`} label="Its phase" key="p" />]}
        {channel.incoherent?.kind === "power" && <Field path={`${path}.incoherent.c0`} label="Incoherent background" />}
        <Field optional path={`${path}.detection.efficiency`} label="Efficiency" example="42 %" />
        <Field optional path={`${path}.detection.background_rate`} label="Background rate" example="1.5 /h" />
        <Field optional path={`${path}.detection.background_cross_section`} label="Background cross section" example="0.42 nb" />
      </div>
      {!own && <Counts channel={channel} />}
      {own && <p class="note">Rows of the thermometer name “{channel.name}” in their channel.</p>}
      <p class="actions">
        <button type="button" class="button" onClick={() => remove(index, channel.name)}>
          Remove {channel.name}
        </button>
      </p>
    </fieldset>
  );
}

/** Counts of the channel at each setting of the sheet's own rows. */
function Counts({ channel }: { channel: Channel }): JSX.Element {
  const rows = sheet.value.data.rows;
  const names = new Set((sheet.value.channels ?? []).map((other) => other.name));
  const mine = rows.filter((row) => row.counts !== undefined && !names.has(row.channel ?? "") && !row.beams_apart);
  return (
    <details>
      <summary>Counts of {channel.name}</summary>
      <table class="plain">
        <thead>
          <tr>
            <th scope="col">Point</th>
            <th scope="col">Setting</th>
            <th scope="col">Counts of {channel.name}</th>
          </tr>
        </thead>
        <tbody>
          {mine.map((row) => {
            const id = `${row.id} ${channel.name}`;
            const at = rows.findIndex((other) => other.id === id);
            return (
              <tr key={row.id}>
                <th scope="row">{row.id}</th>
                <td>{row.w ?? row.setting}</td>
                <td>
                  <input
                    type="text"
                    inputMode="numeric"
                    class="cell-input"
                    aria-label={`Counts of ${channel.name} at ${row.id}`}
                    value={rows[at]?.counts ?? ""}
                    onInput={(event) => put(row, id, channel.name, event.currentTarget.value, at)}
                  />
                </td>
              </tr>
            );
          })}
        </tbody>
      </table>
    </details>
  );
}

function put(row: Row, id: string, channel: string, counts: string, at: number): void {
  if (at >= 0 && counts !== "") {
    setCell(at, "counts", counts);
    return;
  }
  change(`counts of ${channel}`, (before) => {
    const rest = before.data.rows.filter((other) => other.id !== id);
    const { off_counts: _off, tau: _tau, efficiency: _e, efficiency_error: _ee, angle_bins: _bins, ...shared } = row;
    const rows = counts === "" ? rest : [...rest, { ...shared, id, channel, counts }];
    return { ...before, data: { ...before.data, rows } };
  });
}
