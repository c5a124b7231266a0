/** The hand-over: one page for the next shift, seen as it will be printed, always on light paper. */
import type { JSX } from "preact";
import { signal } from "@preact/signals";
import { useEffect, useRef } from "preact/hooks";
import { Icon } from "../parts/icon";
import { download, fileName } from "../state/files";
import { Paper } from "./paper";

/** Whether it is open. */
export const handOver = signal(false);

/** The dialog around the paper. */
export function HandOver(): JSX.Element | null {
  return handOver.value ? <Shown /> : null;
}

function Shown(): JSX.Element {
  const dialog = useRef<HTMLDialogElement>(null);
  useEffect(() => dialog.current?.showModal(), []);
  return (
    <dialog ref={dialog} class="hand-over" data-theme="light" aria-label="Hand-over" onClose={() => (handOver.value = false)}>
      <div class="hand-over-bar">
        <button type="button" class="button button-main" onClick={() => print()}>
          <Icon name="print" /> Print
        </button>
        <button type="button" class="button" onClick={() => dialog.current && saveAsFile(dialog.current)}>
          <Icon name="save" /> Save as a file
        </button>
        <button type="button" class="button" onClick={() => dialog.current?.close()}>
          Close
        </button>
      </div>
      <Paper />
    </dialog>
  );
}

/** The paper as an HTML file of its own: canvases become pictures, the style goes along. */
function saveAsFile(dialog: HTMLElement): void {
  const paper = dialog.querySelector(".paper");
  if (paper === null) return;
  const copy = paper.cloneNode(true) as HTMLElement;
  const drawn = [...paper.querySelectorAll("canvas")];
  [...copy.querySelectorAll("canvas")].forEach((canvas, i) => {
    const image = document.createElement("img");
    image.src = drawn[i]?.toDataURL() ?? "";
    image.alt = "";
    image.width = drawn[i]?.clientWidth ?? 0;
    canvas.replaceWith(image);
  });
  const page = document.implementation.createHTMLDocument(document.title);
  page.documentElement.lang = "en";
  page.documentElement.dataset["theme"] = "light";
  const style = page.createElement("style");
  style.textContent = [...document.querySelectorAll("style")].map((sheet) => sheet.textContent).join("\n");
  page.head.append(style);
  page.body.append(copy);
  const text = `<!doctype html>\n${page.documentElement.outerHTML}\n`;
  download(fileName("hand-over", "html"), new Blob([text], { type: "text/html" }));
}
