/** "Why this number": a number that opens its formula, inputs, accuracy and source. */
import type { ComponentChildren, JSX } from "preact";
import { useSignal } from "@preact/signals";
import { useEffect, useId, useRef } from "preact/hooks";
import { Icon } from "./icon";

/** A number as a button, and what is behind it. */
export function Why(props: { title: string; value: ComponentChildren; children: ComponentChildren }): JSX.Element {
  const id = useId();
  const open = useSignal(false);
  const dialog = useRef<HTMLDialogElement>(null);
  // What is inside is made only when somebody asks: there are many such numbers, and they change with every drag.
  useEffect(() => {
    if (open.value) dialog.current?.showModal();
  }, [open.value]);
  return (
    <>
      <button type="button" class="why" aria-haspopup="dialog" onClick={() => (open.value = true)}>
        {props.value}
        <span class="unseen">, why</span>
      </button>
      {open.value && (
        <dialog
          ref={dialog}
          class="sheet-of-paper"
          onClose={() => (open.value = false)}
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
      )}
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
