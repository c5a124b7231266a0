/** What a fit can be asked beyond its minimum; each by its own button, because each takes its time. */
import type { JSX } from "preact";
import { sheet } from "../state/sheet";
import { Hypotheses } from "./hypotheses";
import { Influence } from "./influence";
import { Intervals } from "./intervals";
import { NoPeak } from "./no-peak";
import { Profile } from "./profile";
import { Solutions } from "./solutions";
import { AgainstTime } from "./time";
import { Trials } from "./trials";

/** All studies; the search for a peak also where nothing is left free. */
export function Beyond(): JSX.Element {
  if (sheet.value.fit.free.length === 0) return <NoPeak />;
  return (
    <>
      <Intervals />
      <Solutions />
      <Trials />
      <Influence />
      <Hypotheses />
      <AgainstTime />
      <Profile />
      <NoPeak />
    </>
  );
}
