/** A canvas that draws itself again when a signal it reads changes, sharp on every screen. */
import type { JSX } from "preact";
import { useLayoutEffect, useRef } from "preact/hooks";
import { effect } from "@preact/signals";
import { plotFont } from "../lanes/ink";
import { look } from "../state/prefs";

/** What a picture draws on; lengths in CSS pixels. */
export interface Paper {
  ctx: CanvasRenderingContext2D;
  width: number;
  height: number;
  root: HTMLElement;
}

interface PictureProps {
  /** Height, CSS pixels; a function of the width. */
  height: (width: number) => number;
  draw: (paper: Paper) => void;
  /** What the picture shows, for whoever does not see it. */
  label: string;
  /** Place of the pointer as shares of the canvas, while it is down or hovers. */
  onPoint?: (x: number, y: number) => void;
}

/** The canvas. */
export function Picture({ height, draw, label, onPoint }: PictureProps): JSX.Element {
  const box = useRef<HTMLCanvasElement>(null);
  useLayoutEffect(() => {
    const canvas = box.current;
    if (canvas === null) return;
    let frame = 0;
    const paint = (): void => {
      frame = 0;
      const width = canvas.parentElement?.clientWidth ?? 0;
      if (width < 60) return;
      const tall = height(width);
      const ratio = devicePixelRatio;
      const [w, h] = [Math.round(width * ratio), Math.round(tall * ratio)];
      if (canvas.width !== w || canvas.height !== h) {
        canvas.width = w;
        canvas.height = h;
        canvas.style.height = `${tall}px`;
      }
      const ctx = canvas.getContext("2d");
      if (ctx === null) return;
      ctx.setTransform(ratio, 0, 0, ratio, 0, 0);
      ctx.clearRect(0, 0, width, tall);
      ctx.font = plotFont();
      ctx.textBaseline = "middle";
      // Read inside the effect below: whatever `draw` reads makes it draw again.
      draw({ ctx, width, height: tall, root: canvas });
    };
    // Signals are read in the frame itself; the effect is run by the frame.
    let stop = (): void => undefined;
    const schedule = (): void => {
      if (frame === 0) frame = requestAnimationFrame(paintTracked);
    };
    const paintTracked = (): void => {
      stop();
      let first = true;
      stop = effect(() => {
        void look.value;
        if (first) {
          first = false;
          paint();
        } else schedule();
      });
    };
    schedule();
    const resized = new ResizeObserver(schedule);
    if (canvas.parentElement !== null) resized.observe(canvas.parentElement);
    return () => {
      cancelAnimationFrame(frame);
      stop();
      resized.disconnect();
    };
  }, [height, draw]);
  const point = (event: PointerEvent): void => {
    if (onPoint === undefined || (event.pointerType !== "mouse" && event.buttons === 0)) return;
    const { left, top, width, height: tall } = (event.currentTarget as HTMLElement).getBoundingClientRect();
    onPoint((event.clientX - left) / width, (event.clientY - top) / tall);
  };
  return <canvas class="picture" ref={box} role="img" aria-label={label} onPointerMove={point} onPointerDown={point} />;
}

/** Colours of an image: from the paper through the curve's colour to the ink. */
export function ramp(colours: readonly string[]): Uint8ClampedArray {
  const stops = colours.map(channels);
  const table = new Uint8ClampedArray(256 * 4);
  for (let i = 0; i < 256; i += 1) {
    const place = (i / 255) * (stops.length - 1);
    const k = Math.min(stops.length - 2, Math.floor(place));
    const part = place - k;
    for (let c = 0; c < 3; c += 1) {
      const [a, b] = [stops[k]?.[c] ?? 0, stops[k + 1]?.[c] ?? 0];
      table[4 * i + c] = a + (b - a) * part;
    }
    table[4 * i + 3] = 255;
  }
  return table;
}

function channels(colour: string): [number, number, number] {
  const short = colour.replace("#", "");
  // The style sheet comes shortened: #fff is #ffffff.
  const hex = short.length === 3 ? [...short].map((digit) => digit + digit).join("") : short;
  const read = (at: number): number => Number.parseInt(hex.slice(at, at + 2), 16);
  return [read(0), read(2), read(4)];
}

const made = new WeakMap<object, Map<string, unknown>>();

/** What has been made of an answer, once for each `key` (the look of the page, say). */
export function kept<T>(answer: object, key: string, make: () => T): T {
  const known = made.get(answer) ?? new Map<string, unknown>();
  made.set(answer, known);
  if (!known.has(key)) known.set(key, make());
  return known.get(key) as T;
}

/** An image of `nx` by `ny` shares (0 to 1; below 0: nothing there), from `at(x, y)` with y from the bottom. */
export function raster(nx: number, ny: number, at: (x: number, y: number) => number, table: Uint8ClampedArray): HTMLCanvasElement | null {
  const small = document.createElement("canvas");
  small.width = nx;
  small.height = ny;
  const ctx = small.getContext("2d");
  if (ctx === null || nx === 0 || ny === 0) return null;
  const pixels = ctx.createImageData(nx, ny);
  for (let y = 0; y < ny; y += 1) {
    for (let x = 0; x < nx; x += 1) {
      const share = at(x, ny - 1 - y);
      if (!(share >= 0)) continue;
      const colour = 4 * Math.min(255, Math.round(share * 255));
      const to = 4 * (y * nx + x);
      for (let c = 0; c < 4; c += 1) pixels.data[to + c] = table[colour + c] ?? 0;
    }
  }
  ctx.putImageData(pixels, 0, 0);
  return small;
}
