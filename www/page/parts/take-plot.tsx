/** A drawn SVG taken away: as SVG that stands on its own, and as PNG. */
import type { JSX } from "preact";
import { download, fileName } from "../state/files";

/** What the style sheet gives and a file needs with it. */
const KEPT = ["fill", "stroke", "stroke-width", "stroke-dasharray", "font-size", "font-family", "opacity"] as const;

/** The picture with its colours inside, on paper of the page's colour. */
export function standalone(drawn: SVGSVGElement): string {
  const copy = drawn.cloneNode(true) as SVGSVGElement;
  const [from, to] = [drawn.querySelectorAll("*"), copy.querySelectorAll("*")];
  to.forEach((part, i) => {
    const look = getComputedStyle(from[i] ?? drawn);
    for (const name of KEPT) part.setAttribute(name, look.getPropertyValue(name));
    part.removeAttribute("class");
  });
  const { width = 420, height = 220 } = drawn.viewBox.baseVal;
  copy.removeAttribute("class");
  copy.setAttribute("width", String(width * 2));
  copy.setAttribute("height", String(height * 2));
  const paper = document.createElementNS("http://www.w3.org/2000/svg", "rect");
  paper.setAttribute("width", "100%");
  paper.setAttribute("height", "100%");
  paper.setAttribute("fill", getComputedStyle(document.documentElement).getPropertyValue("--paper").trim());
  copy.prepend(paper);
  return new XMLSerializer().serializeToString(copy);
}

/** The same in pixels; `null` where the browser cannot. */
export async function pngOf(text: string): Promise<Blob | null> {
  const image = new Image();
  image.src = `data:image/svg+xml;charset=utf-8,${encodeURIComponent(text)}`;
  await image.decode();
  const canvas = document.createElement("canvas");
  canvas.width = image.naturalWidth * 2;
  canvas.height = image.naturalHeight * 2;
  canvas.getContext("2d")?.drawImage(image, 0, 0, canvas.width, canvas.height);
  return new Promise((resolve) => canvas.toBlob(resolve, "image/png"));
}

/** Buttons for one picture: the SVG beside them, or text that is made when it is wanted. */
export function TakePlot({ name, what, text }: { name: string; what: string; text: (button: HTMLElement) => string }): JSX.Element {
  return (
    <>
      <button type="button" class="link" onClick={(event) => download(fileName(name, "svg"), new Blob([text(event.currentTarget)], { type: "image/svg+xml" }))}>
        SVG<span class="unseen"> of {what}</span>
      </button>
      <button
        type="button"
        class="link"
        onClick={(event) => void pngOf(text(event.currentTarget)).then((image) => image && download(fileName(name, "png"), image))}
      >
        PNG<span class="unseen"> of {what}</span>
      </button>
    </>
  );
}
