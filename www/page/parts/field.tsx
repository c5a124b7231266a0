/** One number with its unit, kept as typed; its message beside it as soon as the check has spoken. */
import type { JSX } from "preact";
import { useId } from "preact/hooks";
import { problemAt } from "../state/answers";
import { textAt } from "../state/path";
import { setField, sheet } from "../state/sheet";

interface FieldProps {
  path: string;
  label: string | JSX.Element;
  /** What a person would call the change. */
  name?: string;
  /** Shown in an empty field: an example, never a value. */
  example?: string;
  /** One line under the field. */
  hint?: string;
  /** Empty text means "absent", not "". */
  optional?: boolean;
  wide?: boolean;
}

/** A labelled text field of the sheet. */
export function Field({ path, label, name, example, hint, optional, wide }: FieldProps): JSX.Element {
  const id = useId();
  const text = textAt(sheet.value, path);
  const problem = problemAt(path);
  const told = [problem ? `${id}p` : "", hint ? `${id}h` : ""].filter(Boolean).join(" ");
  return (
    <div class={wide ? "field field-wide" : "field"}>
      <label for={id}>{label}</label>
      <input
        id={id}
        type="text"
        inputMode="text"
        autocomplete="off"
        spellcheck={false}
        value={text}
        placeholder={example ?? ""}
        data-path={path}
        aria-invalid={problem ? "true" : undefined}
        aria-describedby={told || undefined}
        onInput={(event) => {
          const typed = event.currentTarget.value;
          setField(path, typed === "" && optional ? undefined : typed, name ?? (typeof label === "string" ? label : path));
        }}
      />
      {hint && (
        <p class="note" id={`${id}h`}>
          {hint}
        </p>
      )}
      {problem && (
        <p class="problem" id={`${id}p`} role="status">
          {problem.message}
          {problem.allowed && <span class="allowed"> Allowed: {problem.allowed}.</span>}
        </p>
      )}
    </div>
  );
}

interface ChoiceProps<T extends string> {
  label: string;
  value: T;
  options: readonly (readonly [T, string])[];
  onChange: (value: T) => void;
  wide?: boolean;
}

/** A labelled choice among a few. */
export function Choice<T extends string>({ label, value, options, onChange, wide }: ChoiceProps<T>): JSX.Element {
  const id = useId();
  return (
    <div class={wide ? "field field-wide" : "field"}>
      <label for={id}>{label}</label>
      <select id={id} value={value} onChange={(event) => onChange(event.currentTarget.value as T)}>
        {options.map(([key, text]) => (
          <option key={key} value={key}>
            {text}
          </option>
        ))}
      </select>
    </div>
  );
}

/** A switch with words. */
export function Switch(props: { label: string; on: boolean; onChange: (on: boolean) => void }): JSX.Element {
  return (
    <label class="switch">
      <input
        type="checkbox"
        checked={props.on}
        onChange={(event) => props.onChange(event.currentTarget.checked)}
      />
      <span>{props.label}</span>
    </label>
  );
}
