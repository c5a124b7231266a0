/** A newer version of the served page is there: it comes when the person says so, never in the middle of a shift. */
import type { JSX } from "preact";
import { newer, takeNewer, version } from "../state/installed";

/** The offer, or nothing. */
export function Newer(): JSX.Element | null {
  if (!newer.value) return null;
  return (
    <div class="stripe" role="status">
      <p>
        A newer version of this page is ready. You are using {version}; your sheet stays as it is.{" "}
        <button type="button" class="link" onClick={takeNewer}>
          Take it now
        </button>
      </p>
    </div>
  );
}
