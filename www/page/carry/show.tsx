/** The sheet as QR codes on this screen, one at a time, for a tablet's camera. */
import type { JSX } from "preact";
import { useSignal, useSignalEffect } from "@preact/signals";
import { useRef } from "preact/hooks";
import encodeQR from "qr";
import { linkOf } from "../state/files";
import { sheet } from "../state/sheet";
import { Unreadable } from "./pack";
import { seriesOf } from "./series";

/** How long one code of a series stays while the series runs. */
const STEP_MS = 1500;
/** An address longer than this makes a code that no telephone reads off a screen. */
const LONGEST_ADDRESS = 1200;

/** The codes, or why there are none. */
function codesOf(withAddress: boolean): { codes: string[]; wrong: string } {
  if (withAddress) {
    const address = linkOf(sheet.peek());
    return address.length > LONGEST_ADDRESS
      ? { codes: [], wrong: "With the address in it this sheet does not fit one code. Show the series instead and read it with this page on the tablet." }
      : { codes: [address], wrong: "" };
  }
  try {
    return { codes: seriesOf(JSON.stringify(sheet.peek())), wrong: "" };
  } catch (reason) {
    return { codes: [], wrong: reason instanceof Unreadable ? `No codes: ${reason.message}.` : String(reason) };
  }
}

/** The panel. */
export function ShowCodes(): JSX.Element {
  const served = location.protocol.startsWith("http");
  const shown = useSignal<readonly string[]>([]);
  const wrong = useSignal("");
  const at = useSignal(0);
  const running = useSignal(true);
  const canvas = useRef<HTMLCanvasElement>(null);
  const show = (withAddress: boolean): void => {
    const { codes, wrong: why } = codesOf(withAddress);
    shown.value = codes;
    wrong.value = why;
    at.value = 0;
    running.value = codes.length > 1 && !matchMedia("(prefers-reduced-motion: reduce)").matches;
  };
  useSignalEffect(() => {
    const code = shown.value[at.value];
    if (code !== undefined) requestAnimationFrame(() => canvas.current && draw(canvas.current, code));
  });
  useSignalEffect(() => {
    if (!running.value || shown.value.length < 2) return;
    const timer = setInterval(() => (at.value = (at.peek() + 1) % shown.peek().length), STEP_MS);
    return () => clearInterval(timer);
  });
  const step = (by: number): void => {
    running.value = false;
    at.value = (at.value + by + shown.value.length) % shown.value.length;
  };
  return (
    <div class="codes">
      <div class="buttons">
        <button type="button" class="button" onClick={() => show(false)}>
          Show as codes for a camera
        </button>
        {served && (
          <button type="button" class="button" onClick={() => show(true)}>
            One code with this page's address
          </button>
        )}
      </div>
      {wrong.value !== "" && <p class="told" role="status">{wrong.value}</p>}
      {shown.value.length > 0 && (
        <figure class="code">
          <canvas ref={canvas} role="img" aria-label={`Code ${at.value + 1} of ${shown.value.length}`} />
          <figcaption>
            {shown.value.length === 1 ? "One code holds the whole sheet." : `Code ${at.value + 1} of ${shown.value.length}; any order will do.`}
          </figcaption>
          <div class="buttons">
            {shown.value.length > 1 && (
              <>
                <button type="button" class="button" onClick={() => step(-1)}>
                  Before
                </button>
                <button type="button" class="button" aria-pressed={running.value} onClick={() => (running.value = !running.value)}>
                  {running.value ? "Hold" : "Run"}
                </button>
                <button type="button" class="button" onClick={() => step(1)}>
                  Next
                </button>
              </>
            )}
            <button type="button" class="button" onClick={() => (shown.value = [])}>
              Close
            </button>
          </div>
        </figure>
      )}
    </div>
  );
}

/** Black on white whatever the theme: readers expect it. */
function draw(canvas: HTMLCanvasElement, code: string): void {
  const modules = encodeQR(code, "raw", { ecc: "medium", border: 4 });
  const scale = Math.max(3, Math.floor(720 / modules.length));
  canvas.width = canvas.height = modules.length * scale;
  const ink = canvas.getContext("2d");
  if (ink === null) return;
  ink.fillStyle = "#fff";
  ink.fillRect(0, 0, canvas.width, canvas.height);
  ink.fillStyle = "#000";
  modules.forEach((row, y) => row.forEach((dark, x) => dark && ink.fillRect(x * scale, y * scale, scale, scale)));
}
