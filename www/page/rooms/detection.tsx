/** Detection: from a cross section to counts, and what the data have been corrected for. */
import type { JSX } from "preact";
import { Choice, Field } from "../parts/field";
import { around, Slider } from "../parts/slider";
import { setField, sheet } from "../state/sheet";
import type { Data } from "../state/types";

const STAGES = [
  ["observed", "As observed"],
  ["radiation_removed", "Radiation removed"],
  ["born", "Radiation and spread removed (Born)"],
] as const satisfies readonly (readonly [Data["stage"], string])[];

/** The room. */
export function DetectionRoom(): JSX.Element {
  const { data } = sheet.value;
  return (
    <>
      <fieldset>
        <legend>Where a row brings none of its own</legend>
        <div class="fields">
          <div class="with-slider">
            <Field optional path="detection.efficiency" label="Efficiency" example="42 %" />
            <Slider path="detection.efficiency" name="Efficiency" reach={around(2)} />
          </div>
          <Field optional path="detection.live_fraction" label="Live fraction" example="100 %" />
          <Field optional path="detection.decay_fraction" label="Decays into what is detected" example="1" />
          <Field optional path="detection.tau" label={<span>Off-region ratio <span class="sym">τ</span></span>} name="off-region ratio" example="2" />
        </div>
      </fieldset>
      <fieldset>
        <legend>Detector background, never radiated</legend>
        <div class="fields">
          <Field optional path="detection.background_cross_section" label="Visible cross section" example="0.42 nb" />
          <Field optional path="detection.background_rate" label="Rate" example="1.5 /h" />
        </div>
      </fieldset>
      <fieldset>
        <legend>What the data are</legend>
        <div class="fields">
          <Choice wide label="Corrected for" value={data.stage} options={STAGES} onChange={(stage) => setField("data.stage", stage, "stage of the data")} />
          {data.stage === "radiation_removed" && <Field optional path="data.photon_cut" label="With this cut" example="2.65 GeV" />}
          <Choice
            label="Luminosity that counts"
            value={data.luminosity_source ?? "as_given"}
            options={[
              ["as_given", "As each row has it"],
              ["online", "Online"],
              ["final", "Final"],
            ]}
            onChange={(value) => setField("data.luminosity_source", value === "as_given" ? undefined : value, "source of the luminosity")}
          />
        </div>
      </fieldset>
      <fieldset>
        <legend>Errors common to points</legend>
        <div class="fields">
          <Field optional path="data.common_energy_error" label="Energy, all points" example="40 keV" />
          <Field optional path="data.group_energy_error" label="Energy, within a fill" example="60 keV" />
          <Field optional path="data.common_scale_error" label="Scale, all points" example="1 %" />
        </div>
      </fieldset>
    </>
  );
}
