/** What a fit can be asked beyond its minimum; each by its own button, because each takes its time. */
import type { JSX } from "preact";
import { sheet } from "../state/sheet";
import { Intervals } from "./intervals";
import { Solutions } from "./solutions";
import { Trials } from "./trials";

/** All studies, once something is left free. */
export function Beyond(): JSX.Element | null {
  if (sheet.value.fit.free.length === 0) return null;
  return (
    <>
      <Intervals />
      <Solutions />
      <Trials />
    </>
  );
}
