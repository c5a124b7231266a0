/** "Why this number": a number that opens its formula, inputs, accuracy and source. */
import type { ComponentChildren, JSX } from "preact";
import { useId, useRef } from "preact/hooks";
import { Icon } from "./icon";

/** A number as a button, and what is behind it. */
export function Why(props: { title: string; value: ComponentChildren; children: ComponentChildren }): JSX.Element {
  const id = useId();
  const dialog = useRef<HTMLDialogElement>(null);
  return (
    <>
      <button type="button" class="why" aria-haspopup="dialog" onClick={() => dialog.current?.showModal()}>
        {props.value}
        <span class="unseen">, why</span>
      </button>
      <dialog
        ref={dialog}
        class="sheet-of-paper"
        aria-labelledby={id}
        onClick={(event) => {
          if (event.target === dialog.current) dialog.current?.close();
        }}
      >
        <div class="dialog-head">
          <h2 id={id}>{props.title}</h2>
          <button type="button" class="tool" aria-label="Close" onClick={() => dialog.current?.close()}>
            <Icon name="close" />
          </button>
        </div>
        {props.children}
      </dialog>
    </>
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
