/** A beam particle: by name from the table, found as it is typed, or any other with its mass and spin. */
import type { JSX } from "preact";
import { useId } from "preact/hooks";
import { Field } from "../parts/field";
import { problemAt } from "../state/answers";
import { textAt } from "../state/path";
import { setField, sheet } from "../state/sheet";
import { particles } from "../state/tables";

/** Name with suggestions; mass and spin appear for a particle that the table does not know. */
export function ParticlePicker({ path, label }: { path: string; label: string }): JSX.Element {
  const id = useId();
  const name = textAt(sheet.value, `${path}.name`);
  const known = particles.value.some((particle) => particle.name === name);
  const problem = problemAt(`${path}.name`) ?? problemAt(path);
  const own = textAt(sheet.value, `${path}.mass`) !== "" || (!known && particles.value.length > 0);
  return (
    <>
      <div class="field">
        <label for={id}>{label}</label>
        <input
          id={id}
          type="text"
          autocomplete="off"
          spellcheck={false}
          list={`${id}l`}
          value={name}
          data-path={`${path}.name`}
          aria-invalid={problem ? "true" : undefined}
          aria-describedby={problem ? `${id}p` : undefined}
          onInput={(event) => setField(`${path}.name`, event.currentTarget.value, label)}
        />
        <datalist id={`${id}l`}>
          {particles.value.map((particle) => (
            <option key={particle.name} value={particle.name} />
          ))}
        </datalist>
        {problem && (
          <p class="problem" id={`${id}p`} role="status">
            {problem.message}
          </p>
        )}
      </div>
      {own && <Field optional path={`${path}.mass`} label={`Mass of ${label.toLowerCase()}`} example="938.272 MeV" />}
      {own && <Field optional path={`${path}.spin`} label={`Spin of ${label.toLowerCase()}`} example="1/2" />}
    </>
  );
}
