/** Detection: from a cross section to counts, and what the data have been corrected for. */
import type { JSX } from "preact";
import { Choice, Field, Switch } from "../parts/field";
import { Matrix } from "../fit/matrix";
import { around, Slider } from "../parts/slider";
import { setField, sheet } from "../state/sheet";
import type { Data } from "../state/types";

const STAGES = [
  ["observed", "As observed"],
  ["radiation_removed", "Radiation removed"],
  ["born", "Radiation and spread removed (Born)"],
] as const satisfies readonly (readonly [Data["stage"], string])[];

const MONITORS = [
  ["unsaid", "Not said"],
  ["small_angle", "Elastic scattering, small angles"],
  ["wide_angle", "Elastic scattering, wide angles"],
  ["two_photons", "Two photons"],
  ["muon_pairs", "Muon pairs"],
  ["other", "Something no resonance feeds"],
] as const;

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
          <Field optional path="detection.photon_cut" label="Its photon cut, least W" example="2.65 GeV" />
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
          <Choice
            label="Luminosity measured with"
            value={data.luminosity_monitor ?? "unsaid"}
            options={MONITORS}
            onChange={(value) => setField("data.luminosity_monitor", value === "unsaid" ? undefined : value, "process of the luminosity")}
          />
        </div>
      </fieldset>
      <fieldset>
        <legend>Errors common to points</legend>
        <div class="fields">
          <Field optional path="data.common_energy_error" label="Energy, all points" example="40 keV" />
          <Field optional path="data.group_energy_error" label="Energy, within a fill" example="60 keV" />
          <Field optional path="data.common_slope_error" label="Energy scale, relative" example="1e-5" />
          <Field optional path="data.common_scale_error" label="Scale, all points" example="1 %" />
          <Field optional path="data.group_scale_error" label="Scale, within a fill" example="1 %" />
          <Field optional path="data.common_luminosity_error" label="Luminosity, all points" example="2 %" />
          <Field optional path="data.group_luminosity_error" label="Luminosity, within a fill" example="1 %" />
          <Field optional path="data.efficiency_slope_error" label="Slope of ln efficiency" example="0.001 /MeV" />
          <Field optional path="data.point_spread_error" label="Spread, each point" example="5 %" />
        </div>
        <Switch label="Factors 1 + δη (Gaussian) instead of exp(δη) (log-normal)" on={data.gaussian_factors === true} onChange={(on) => setField("data.gaussian_factors", on, "kind of the factors")} />
        <Matrix path="data.energy_covariance" label="Covariance of the energies" example="one row a line, such as 0.0036 MeV^2  0.0010 MeV^2" />
        <div class="fields">
        </div>
      </fieldset>
    </>
  );
}
