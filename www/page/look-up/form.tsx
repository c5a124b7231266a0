/** One look-up: a few typed values, answered by the worker as they are typed. */
import type { JSX } from "preact";
import { type Signal, useSignal, useSignalEffect } from "@preact/signals";
import { useId } from "preact/hooks";
import { Refused } from "../bridge/failures";
import { Icon } from "../parts/icon";
import { Quantity } from "../parts/quantity";
import { Explained } from "../parts/why-list";
import { copy } from "../state/files";
import { sheet } from "../state/sheet";
import { particles } from "../state/tables";
import type { Named, Refusal, Request } from "../state/types";
import { ask } from "../state/work";
import { Into } from "./into";

type What = Extract<Request, { kind: "look_up" }>["what"];

/** One typed value. */
export interface Ask {
  key: string;
  label: string;
  example: string;
  /** A particle may be named. */
  particle?: boolean;
}

interface LookUpProps {
  title: string;
  asks: readonly Ask[];
  /** What stands there at first. */
  first: Record<string, string>;
  /** The question; `null`: not enough has been typed. */
  what: (typed: Record<string, string>) => What | null;
  open?: boolean;
  children?: (typed: Signal<Record<string, string>>) => JSX.Element;
}

/** A section that opens with one tap. */
export function LookUp({ title, asks, first, what, open, children }: LookUpProps): JSX.Element {
  const typed = useSignal(first);
  const wanted = useSignal(open === true);
  return (
    <details class="look-up" open={wanted.value} onToggle={(event) => (wanted.value = event.currentTarget.open)}>
      <summary>{title}</summary>
      {wanted.value && <Asked asks={asks} typed={typed} what={what} more={children?.(typed)} />}
    </details>
  );
}

interface AskedProps {
  asks: readonly Ask[];
  typed: Signal<Record<string, string>>;
  what: LookUpProps["what"];
  more: JSX.Element | undefined;
}

function Asked({ asks, typed, what, more }: AskedProps): JSX.Element {
  const id = useId();
  const values = useSignal<Named[]>([]);
  const refused = useSignal<Refusal | null>(null);
  const told = useSignal("");
  useSignalEffect(() => {
    const question = what(typed.value);
    const now = sheet.value;
    let wanted = true;
    if (question === null) {
      values.value = [];
      refused.value = null;
    } else {
      ask({ kind: "look_up", sheet: { ...now, data: { ...now.data, rows: [] } }, what: question }).then(
        ({ body }) => {
          if (!wanted || body.kind !== "looked_up") return;
          values.value = body.values;
          refused.value = null;
        },
        (reason: unknown) => {
          if (!wanted) return;
          values.value = [];
          refused.value = reason instanceof Refused ? reason.refusal : null;
        },
      );
    }
    return () => {
      wanted = false;
    };
  });
  const problem = refused.value;
  return (
    <>
      <div class="fields">
        {more}
        {asks.map(({ key, label, example, particle }) => (
          <div class="field" key={key}>
            <label for={`${id}${key}`}>{label}</label>
            <input
              id={`${id}${key}`}
              type="text"
              autocomplete="off"
              spellcheck={false}
              {...(particle ? { list: `${id}l` } : {})}
              value={typed.value[key] ?? ""}
              placeholder={example}
              aria-invalid={problem?.field === key ? "true" : undefined}
              aria-describedby={`${id}p`}
              onInput={(event) => (typed.value = { ...typed.value, [key]: event.currentTarget.value })}
            />
          </div>
        ))}
      </div>
      <datalist id={`${id}l`}>
        {particles.value.map((known) => (
          <option key={known.name} value={known.name} />
        ))}
      </datalist>
      <p class="problem" id={`${id}p`} role="status">
        {problem !== null && `${problem.message}${problem.allowed ? ` Allowed: ${problem.allowed}.` : ""}`}
      </p>
      <ul class="digits">
        {values.value.map((entry) => (
          <Line key={entry.name} entry={entry} told={(words) => (told.value = words)} />
        ))}
      </ul>
      <p class="note" role="status">
        {told.value}
      </p>
    </>
  );
}

interface LineProps {
  entry: Named;
  told: (words: string) => void;
  /** Large digits, to be read down a phone. */
  big?: boolean;
  /** The number is a setting of the kind that the dial shows. */
  dial?: boolean;
  /** What is behind it, if that is not under its own name. */
  why?: string | undefined;
  /** It belongs into no field. */
  only?: boolean;
}

/** One number: name, digits, why, use, copy. */
export function Line({ entry, told, big, dial, why, only }: LineProps): JSX.Element {
  const { text, name } = entry;
  return (
    <li class={`${big ? "line-big" : ""} ${dial ? "strong" : ""}`}>
      <span class="note">{name}</span>
      <span class={big ? "figure" : "value"}>
        <Explained of={why ?? name} title={name} value={<Quantity text={text} />} />
      </span>
      {only !== true && <Into text={text} value={entry.value} unit={entry.unit} dial={dial === true} told={told} />}
      <button type="button" class="tool" aria-label={`Copy ${text}`} onClick={() => void copy(text).then((done) => told(done ? `${text} copied.` : "This browser does not let the page copy."))}>
        <Icon name="copy" />
      </button>
    </li>
  );
}
