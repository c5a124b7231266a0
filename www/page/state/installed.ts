/** The served page keeps itself for times without network, and asks before it changes to a newer version. */
import { signal } from "@preact/signals";

/** Set by the build. */
declare const __VERSION__: string | undefined;

/** The version of this page. */
export const version = typeof __VERSION__ === "string" ? __VERSION__ : "development";
/** Whether this page will open without a network (a file always does). */
export const offlineReady = signal(location.protocol === "file:");
/** A newer version is kept and waits for a word. */
export const newer = signal(false);

let waiting: ServiceWorker | null = null;

/** Registers the keeper where the page is served with one; a file from a stick has none. */
export async function keepInstalled(): Promise<void> {
  if (document.querySelector("link[rel=manifest]") === null || !("serviceWorker" in navigator)) return;
  try {
    const registration = await navigator.serviceWorker.register("sw.js");
    const look = (): void => {
      waiting = registration.waiting;
      // Without an active one this is the first visit: nothing is newer than what is seen.
      newer.value = waiting !== null && registration.active !== null;
    };
    look();
    registration.addEventListener("updatefound", () => {
      registration.installing?.addEventListener("statechange", look);
    });
    await navigator.serviceWorker.ready;
    offlineReady.value = true;
  } catch {
    // Private windows and plain http refuse; the page works all the same while it is open.
    offlineReady.value = false;
  }
}

/** Changes to the newer version; everything typed is saved first by the page's own leaving. */
export function takeNewer(): void {
  navigator.serviceWorker.addEventListener("controllerchange", () => location.reload(), { once: true });
  waiting?.postMessage("take over");
}
