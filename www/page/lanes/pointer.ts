/** Mouse, finger and wheel on the lanes: one cursor, zoom by drag, wheel, pinch and double tap. */
import { signal } from "@preact/signals";
import { cursor, isZoomed, show, showAll, slide, view, zoomAt } from "../state/view";
import { energyAt, GUTTER, MARGIN } from "./axis";

/** Stretch being marked by a drag, as shares of the axis. */
export const marked = signal<{ from: number; to: number } | null>(null);

/** A drag shorter than this is a click, CSS pixels. */
const CLICK_PX = 6;
const DOUBLE_TAP_MS = 300;

/** Listens on the lanes' box; returns what stops it. */
export function listen(box: HTMLElement): () => void {
  const fingers = new Map<number, number>();
  let pinch: { gap: number; middle: number } | null = null;
  let start: number | null = null;
  let lastTap = 0;
  /** Where a single finger came down, as long as it may still be a tap. */
  let tap: number | null = null;

  const share = (clientX: number): number => {
    const { left, width } = box.getBoundingClientRect();
    const inner = width - GUTTER - MARGIN;
    return Math.min(1, Math.max(0, (clientX - left - GUTTER) / inner));
  };
  const point = (event: PointerEvent): void => {
    cursor.value = energyAt(share(event.clientX), view.peek());
  };
  const spread = (): { gap: number; middle: number } => {
    const [a = 0, b = 0] = [...fingers.values()];
    return { gap: Math.max(20, Math.abs(a - b)), middle: (a + b) / 2 };
  };

  const down = (event: PointerEvent): void => {
    if (event.target instanceof Element && event.target.closest("button, a, input, label, .grip") !== null) return;
    if (event.pointerType === "mouse") {
      if (event.button === 0) start = event.clientX;
      box.setPointerCapture(event.pointerId);
      return;
    }
    fingers.set(event.pointerId, event.clientX);
    tap = fingers.size === 1 ? event.clientX : null;
    if (fingers.size === 2) pinch = spread();
    else point(event);
  };
  const move = (event: PointerEvent): void => {
    if (event.pointerType === "mouse") {
      point(event);
      if (start !== null && Math.abs(event.clientX - start) > CLICK_PX) {
        const [a, b] = [share(start), share(event.clientX)];
        marked.value = { from: Math.min(a, b), to: Math.max(a, b) };
      }
      return;
    }
    if (!fingers.has(event.pointerId)) return;
    if (tap !== null && Math.abs(event.clientX - tap) > CLICK_PX) tap = null;
    fingers.set(event.pointerId, event.clientX);
    if (fingers.size === 2 && pinch !== null) {
      const now = spread();
      const w = energyAt(share(pinch.middle), view.peek());
      zoomAt(w, pinch.gap / now.gap);
      slide(share(pinch.middle) - share(now.middle));
      pinch = now;
    } else if (fingers.size === 1) point(event);
  };
  const up = (event: PointerEvent): void => {
    if (event.pointerType === "mouse") {
      const stretch = marked.peek();
      marked.value = null;
      start = null;
      if (stretch !== null) {
        const range = view.peek();
        show({ from: energyAt(stretch.from, range), to: energyAt(stretch.to, range) });
      }
      return;
    }
    fingers.delete(event.pointerId);
    pinch = null;
    if (tap === null || event.type === "pointercancel") return;
    if (event.timeStamp - lastTap < DOUBLE_TAP_MS) doubled(event);
    lastTap = event.timeStamp;
  };
  const doubled = (event: MouseEvent): void => {
    if (isZoomed.peek()) showAll();
    else zoomAt(energyAt(share(event.clientX), view.peek()), 1 / 3);
  };
  const wheel = (event: WheelEvent): void => {
    if (event.deltaX === 0 && event.deltaY === 0) return;
    event.preventDefault();
    if (event.shiftKey || Math.abs(event.deltaX) > Math.abs(event.deltaY)) {
      slide((event.deltaX || event.deltaY) / 1000);
      return;
    }
    const step = Math.max(-60, Math.min(60, event.deltaY)) / 250;
    zoomAt(energyAt(share(event.clientX), view.peek()), Math.exp(step));
  };
  const leave = (event: PointerEvent): void => {
    if (event.pointerType === "mouse" && start === null) cursor.value = null;
  };
  const double = (event: MouseEvent): void => {
    if (matchMedia("(pointer: fine)").matches) doubled(event);
  };

  box.addEventListener("pointerdown", down);
  box.addEventListener("pointermove", move);
  box.addEventListener("pointerup", up);
  box.addEventListener("pointercancel", up);
  box.addEventListener("pointerleave", leave);
  box.addEventListener("dblclick", double);
  box.addEventListener("wheel", wheel, { passive: false });
  return () => {
    box.removeEventListener("pointerdown", down);
    box.removeEventListener("pointermove", move);
    box.removeEventListener("pointerup", up);
    box.removeEventListener("pointercancel", up);
    box.removeEventListener("pointerleave", leave);
    box.removeEventListener("dblclick", double);
    box.removeEventListener("wheel", wheel);
  };
}
