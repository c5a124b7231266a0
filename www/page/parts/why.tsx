/** "Why this number": a number that opens its formula, inputs, accuracy and source. */
import type { ComponentChildren, JSX } from "preact";
import { signal } from "@preact/signals";
import { useEffect, useRef } from "preact/hooks";
import { Icon } from "./icon";

/** What has been asked about; one at a time. */
const asked = signal<{ title: string; inside: ComponentChildren } | null>(null);

/** A number as a button. What is behind it is made only when somebody asks: there are many such numbers. */
export function Why(props: { title: string; value: ComponentChildren; children: ComponentChildren }): JSX.Element {
  return (
    <button type="button" class="why" aria-haspopup="dialog" onClick={() => (asked.value = { title: props.title, inside: props.children })}>
      {props.value}
      <span class="unseen">, why</span>
    </button>
  );
}

/** The one place where it is shown, outside of whatever the number stands in. */
export function WhyDialog(): JSX.Element | null {
  return asked.value === null ? null : <Shown {...asked.value} />;
}

function Shown({ title, inside }: { title: string; inside: ComponentChildren }): JSX.Element {
  const dialog = useRef<HTMLDialogElement>(null);
  useEffect(() => dialog.current?.showModal(), []);
  return (
    <dialog
      ref={dialog}
      class="sheet-of-paper"
      onClose={() => (asked.value = null)}
      aria-labelledby="why-title"
      onClick={(event) => {
        if (event.target === dialog.current) dialog.current?.close();
      }}
    >
      <div class="dialog-head">
        <h2 id="why-title">{title}</h2>
        <button type="button" class="tool" aria-label="Close" onClick={() => dialog.current?.close()}>
          <Icon name="close" />
        </button>
      </div>
      {inside}
    </dialog>
  );
}

/** A fraction in MathML. */
export function Fraction({ over, under }: { over: ComponentChildren; under: ComponentChildren }): JSX.Element {
  return (
    <mfrac>
      <mrow>{over}</mrow>
      <mrow>{under}</mrow>
    </mfrac>
  );
}
