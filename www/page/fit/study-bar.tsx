/** The button of a study, how far it has come, and what it says beside its numbers. */
import type { JSX } from "preact";
import { digits } from "../format/number";
import type { Warning } from "../state/types";
import type { Study } from "./study";

interface BarProps {
  study: Study<unknown>;
  /** Words on the button. */
  words: string;
  onRun: () => void;
  disabled?: boolean;
}

/** Runs, shows the progress, cancels. */
export function StudyBar({ study, words, onRun, disabled }: BarProps): JSX.Element {
  const pace = study.pace.value;
  return (
    <>
      <p class="actions">
        <button type="button" class="button" disabled={disabled || pace !== null} onClick={onRun}>
          {words}
        </button>
        {pace !== null && (
          <>
            <progress aria-label={`${words}: progress`} {...(pace.total > 0 ? { value: pace.done, max: pace.total } : {})} />
            <span class="note">
              {pace.total > 0 && `${pace.done} of ${pace.total}`}
              {pace.left !== null && `, about ${time(pace.left)} left`}
            </span>
            <button type="button" class="button" onClick={study.cancel}>
              Cancel
            </button>
          </>
        )}
      </p>
      <p class="problem" role="status">
        {study.refused.value}
      </p>
      {study.old.value && <p class="note">Made before the last change of the sheet.</p>}
    </>
  );
}

/** Warnings below a result. */
export function Cautions({ warnings }: { warnings: readonly Warning[] }): JSX.Element {
  return (
    <>
      {warnings.map((warning) => (
        <p class="note" key={warning.code + warning.message}>
          {warning.message}
        </p>
      ))}
    </>
  );
}

function time(seconds: number): string {
  return seconds < 90 ? `${Math.max(1, Math.round(seconds))} s` : `${digits(seconds / 60, 2)} min`;
}
