/** Fit: what is left free, what is known beforehand, and what comes out with how much trust. */
import type { JSX } from "preact";
import { Beyond } from "../fit/beyond";
import { AngularBins } from "../fit/bins";
import { Channels } from "../fit/channels";
import { FreeParameters } from "../fit/free";
import { Outcome } from "../fit/outcome";

/** The room. */
export function FitRoom(): JSX.Element {
  return (
    <>
      <Outcome />
      <FreeParameters />
      <Channels />
      <AngularBins />
      <Beyond />
    </>
  );
}
