/**
 * Autosave in this browser. Every tab writes versions of its own and never touches another tab's, so that two
 * tabs cannot overwrite each other. Where IndexedDB is forbidden, localStorage holds the newest version; where
 * that is forbidden too, the page says so and asks for a file.
 */
import { effect, signal } from "@preact/signals";
import { saveTrouble, savedAt, unsaved } from "./saved";
import { opened, revision, sheet } from "./sheet";
import type { Sheet } from "./types";

/** One saved version. */
export interface Version {
  key: number;
  /** ms since 1970. */
  at: number;
  /** Which tab wrote it. */
  tab: string;
  title: string;
  text: string;
}

const DATABASE = "widthwise";
const STORE = "versions";
const FALLBACK = "widthwise.newest.1";
const STILL_MS = 400;
/** Longest wait for the store to open. */
const PATIENCE_MS = 5000;
/** Even while the typing goes on, nothing is older than this in the store. */
const LONGEST_MS = 2000;
/** One version at least this often is kept for good (up to KEPT); those between replace each other. */
const STEP_MS = 120_000;
const KEPT = 200;

/** This tab. */
const TAB = Math.random().toString(36).slice(2, 10);

/** Saved versions, newest first, without their text's meaning. */
export const versions = signal<Version[]>([]);
/** Another tab has saved a sheet since this one was opened: its newest version. */
export const otherTab = signal<Version | null>(null);

let database: IDBDatabase | null = null;
let current: Version | null = null;
const channel = typeof BroadcastChannel === "undefined" ? null : new BroadcastChannel("widthwise");

/** Opens the store and returns the newest version, if there is one. */
export async function openStore(): Promise<Version | null> {
  try {
    database = await openDatabase();
    const kept = await all(database);
    // What a closing page could not wait for went into the other storage, which does not make it wait.
    const left = readFallback();
    if (left !== null && !kept.some((version) => version.key === left.key && version.tab === left.tab && version.at >= left.at)) {
      await put(database, left);
      versions.value = await all(database);
    } else versions.value = kept;
  } catch {
    database = null;
    const text = readFallback();
    versions.value = text === null ? [] : [text];
  }
  channel?.addEventListener("message", (event: MessageEvent<Version>) => {
    if (event.data.tab !== TAB) otherTab.value = event.data;
  });
  return versions.value[0] ?? null;
}

/** Saves the sheet whenever it has been still for a moment, and at once when the page is left. */
export function keepSaving(): () => void {
  let timer = 0;
  let first = true;
  let since = 0;
  const stop = effect(() => {
    void revision.value;
    if (!opened.value) return;
    const now = sheet.value;
    if (first) {
      first = false;
      return;
    }
    if (!unsaved.peek()) since = Date.now();
    unsaved.value = true;
    clearTimeout(timer);
    timer = window.setTimeout(() => void save(now), Date.now() - since > LONGEST_MS ? 0 : STILL_MS);
  });
  const hide = (): void => {
    if (!unsaved.peek()) return;
    clearTimeout(timer);
    void save(sheet.peek());
  };
  const leave = (): void => {
    // A field that takes its text on leaving it takes it now.
    if (document.activeElement instanceof HTMLElement) document.activeElement.blur();
    if (!unsaved.peek()) return;
    try {
      localStorage.setItem(FALLBACK, JSON.stringify(versionOf(sheet.peek())));
    } catch {
      // Too large or forbidden: the database may still be quick enough.
    }
    hide();
  };
  addEventListener("pagehide", leave);
  document.addEventListener("visibilitychange", hide);
  return () => {
    stop();
    removeEventListener("pagehide", leave);
    document.removeEventListener("visibilitychange", hide);
  };
}

function versionOf(now: Sheet): Version {
  const at = Date.now();
  const fresh = current === null || at - current.key > STEP_MS;
  return { key: fresh ? at : (current?.key ?? at), at, tab: TAB, title: now.title, text: JSON.stringify(now) };
}

async function save(now: Sheet): Promise<void> {
  const version = versionOf(now);
  const { at } = version;
  try {
    if (database !== null) await put(database, version);
    else localStorage.setItem(FALLBACK, JSON.stringify(version));
    current = version;
    savedAt.value = at;
    unsaved.value = false;
    saveTrouble.value = "";
    versions.value = [version, ...versions.peek().filter((other) => other.key !== version.key || other.tab !== TAB)].slice(0, KEPT);
    channel?.postMessage(version);
  } catch (reason) {
    const full = reason instanceof DOMException && reason.name === "QuotaExceededError";
    saveTrouble.value = full
      ? "The storage of this browser is full: nothing more is saved here. Save the sheet to a file."
      : "This browser does not let the page save anything. Save the sheet to a file before you close it.";
  }
}

function openDatabase(): Promise<IDBDatabase> {
  return new Promise((resolve, reject) => {
    // A store that is being deleted elsewhere may keep one waiting for ever; the page must not.
    setTimeout(() => reject(new Error("storage does not answer")), PATIENCE_MS);
    const request = indexedDB.open(DATABASE, 1);
    request.onupgradeneeded = () => request.result.createObjectStore(STORE, { keyPath: ["key", "tab"] });
    request.onsuccess = () => {
      // Whoever clears this browser's storage is not to wait for us.
      request.result.onversionchange = () => request.result.close();
      resolve(request.result);
    };
    request.onerror = () => reject(request.error ?? new Error("storage refused"));
    request.onblocked = () => reject(new Error("storage blocked"));
  });
}

function all(from: IDBDatabase): Promise<Version[]> {
  return new Promise((resolve, reject) => {
    const request = from.transaction(STORE).objectStore(STORE).getAll();
    request.onsuccess = () => resolve((request.result as Version[]).sort((a, b) => b.at - a.at));
    request.onerror = () => reject(request.error ?? new Error("storage refused"));
  });
}

function put(into: IDBDatabase, version: Version): Promise<void> {
  return new Promise((resolve, reject) => {
    const work = into.transaction(STORE, "readwrite");
    const store = work.objectStore(STORE);
    store.put(version);
    for (const old of versions.peek().slice(KEPT)) store.delete([old.key, old.tab]);
    work.oncomplete = () => resolve();
    work.onabort = () => reject(work.error ?? new Error("storage refused"));
  });
}

function readFallback(): Version | null {
  try {
    const text = localStorage.getItem(FALLBACK);
    return text === null ? null : (JSON.parse(text) as Version);
  } catch {
    return null;
  }
}
