/** Beam: who meets whom, what the dial shows, spread, luminosity, and the tie between dial and true W. */
import type { JSX } from "preact";
import { Choice, Field } from "../parts/field";
import { around, Slider } from "../parts/slider";
import { setField, sheet } from "../state/sheet";
import type { Arrangement, Dial, SpreadKind } from "../state/types";
import { ParticlePicker } from "./particle";

const ARRANGEMENTS = [
  ["equal_beams", "Two beams dialled alike"],
  ["unequal_beams", "Beam 1 dialled, beam 2 fixed"],
  ["fixed_target", "Beam on a target at rest"],
] as const satisfies readonly (readonly [Arrangement, string])[];

const DIALS = [
  ["total_energy", "Total energy of beam 1"],
  ["kinetic_energy", "Kinetic energy of beam 1"],
  ["momentum", "Momentum of beam 1"],
  ["w", "W"],
] as const satisfies readonly (readonly [Dial, string])[];

const SPREADS = [
  ["none", "None"],
  ["w", "Gaussian in W"],
  ["relative", "Gaussian, relative, each beam"],
  ["each", "Gaussian, absolute, each beam"],
  ["table", "Tabulated in W"],
] as const satisfies readonly (readonly [SpreadKind, string])[];

/** The room. */
export function BeamRoom(): JSX.Element {
  const beam = sheet.value.beam;
  const gaussian = beam.spread.kind !== "none" && beam.spread.kind !== "table";
  const two = beam.arrangement !== "fixed_target";
  return (
    <>
      <fieldset>
        <legend>Particles</legend>
        <div class="fields">
          <Choice wide label="Arrangement" value={beam.arrangement} options={ARRANGEMENTS} onChange={(value) => setField("beam.arrangement", value, "arrangement")} />
          <ParticlePicker path="beam.first" label="Beam 1" />
          <ParticlePicker path="beam.second" label={two ? "Beam 2" : "Target"} />
          <Choice label="The dial shows" value={beam.dial} options={DIALS} onChange={(value) => setField("beam.dial", value, "dial")} />
          {two && <Field optional path="beam.crossing_angle" label="Crossing angle" example="0 mrad" />}
          {beam.arrangement === "unequal_beams" && <Field optional path="beam.second_setting" label="Setting of beam 2" example="3.1 GeV" />}
        </div>
      </fieldset>
      <fieldset>
        <legend>Spread</legend>
        <div class="fields">
          <Choice label="Shape" value={beam.spread.kind} options={SPREADS} onChange={(value) => setField("beam.spread.kind", value, "shape of the spread")} />
          {gaussian && (
            <div class="with-slider">
              <Field optional path="beam.spread.first" label={beam.spread.kind === "w" ? "σ of W" : "Spread of beam 1"} example={beam.spread.kind === "relative" ? "3.5e-4" : "0.71 MeV"} name="spread" />
              <Slider path="beam.spread.first" name="Spread" reach={around(4)} />
            </div>
          )}
          {gaussian && beam.spread.kind !== "w" && two && <Field optional path="beam.spread.second" label="Spread of beam 2" example="as beam 1" />}
          {gaussian && <Field optional path="beam.spread.known_to" label="Known to" example="3 %" />}
          {gaussian && <Field optional path="beam.spread.power" label="Grows with W as power" example="0" hint="0, 1 or 2" />}
          {beam.spread.kind === "table" && <SpreadTable />}
        </div>
      </fieldset>
      <fieldset>
        <legend>Luminosity and energy scale</legend>
        <div class="fields">
          <Field optional path="beam.luminosity" label="Luminosity" example="9.0e30 cm^-2 s^-1" />
          <Field optional path="beam.calibration.at" label="Calibrated at" example="2026-12-01T02:10+01:00" hint="Date, time and zone" />
          <Field optional path="beam.calibration.offset" label="Offset of W" example="0 keV" hint="True W = (1 + slope) · W dialled + offset" />
          <Field optional path="beam.calibration.slope" label="Slope" example="0" />
          <Field wide optional path="beam.calibration.note" label="How, by whom" example="resonant depolarisation, fill 12" />
        </div>
      </fieldset>
      <p class="note">
        Beam changes are made by the accelerator's operators under the facility's procedures. Radiation and machine
        protection are not modelled.
      </p>
    </>
  );
}

/** Rows (offset, weight) as lines of text; only whole lines reach the sheet. */
function SpreadTable(): JSX.Element {
  const rows = sheet.value.beam.spread.table ?? [];
  return (
    <div class="field field-wide">
      <label for="spread-table">Offset and weight, one pair a line</label>
      <textarea
        id="spread-table"
        rows={6}
        value={rows.map((row) => row.join("; ")).join("\n")}
        placeholder={"-2 MeV; 0\n0 MeV; 1\n2 MeV; 0"}
        onChange={(event) => {
          const table = event.currentTarget.value
            .split("\n")
            .filter((line) => line.trim() !== "")
            .map((line) => {
              const [offset = "", weight = ""] = line.split(/[;\t]/);
              return [offset.trim(), weight.trim()];
            });
          setField("beam.spread.table", table, "table of the spread");
        }}
      />
    </div>
  );
}
