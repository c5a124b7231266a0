/** The page: a bar, what must be seen at a glance, the axis with its lanes and points, and the rooms beside it. */
import type { JSX } from "preact";
import { useSignal } from "@preact/signals";
import { useEffect } from "preact/hooks";
import { Amplitude } from "./amplitude/amplitude";
import { stage, Stages } from "./amplitude/stage";
import { DataTable } from "./data/table";
import { HandOver } from "./hand-over/hand-over";
import { Bar } from "./header/bar";
import { Newer } from "./header/newer";
import { Strip } from "./header/strip";
import { Stripe } from "./header/stripe";
import { Lanes } from "./lanes/lanes";
import { WhyDialog } from "./parts/why";
import { Rooms } from "./rooms/rooms";
import { broken } from "./state/answers";
import { opened } from "./state/sheet";

/** Everything that is seen once a sheet is open: figures and curve first, what is beside and below one frame later. */
export function App(): JSX.Element {
  const late = useSignal(false);
  useEffect(() => {
    if (opened.value) requestAnimationFrame(() => setTimeout(() => (late.value = true)));
  }, [opened.value]);
  if (!opened.value) {
    return (
      <main class="starting">
        <p class="brand">Widthwise</p>
        <p role="status">{broken.value || "Starting…"}</p>
      </main>
    );
  }
  return (
    <>
      <a class="skip" href="#scan">
        To the scan
      </a>
      <Bar />
      <Strip />
      <Newer />
      <Stripe />
      <main class="desk" id="scan" tabIndex={-1}>
        <div class="axis">
          <Stages />
          {stage.value === "amplitude" ? <Amplitude /> : <Lanes />}
          {late.value && <DataTable />}
        </div>
        {late.value && <Rooms />}
      </main>
      <HandOver />
      <WhyDialog />
    </>
  );
}
