// Keeps the served page for times without network: one page, one cache, named after its content.
// A newer page is fetched and kept beside the old one until the person says "take it".
const CACHE = "widthwise-%HASH%";
const FILES = ["./", "manifest.webmanifest", "icon.svg"];

self.addEventListener("install", (event) => {
  // Past the browser's own cache, or an old page could be kept under the new name.
  const fresh = FILES.map((file) => new Request(file, { cache: "reload" }));
  event.waitUntil(caches.open(CACHE).then((cache) => cache.addAll(fresh)));
});

self.addEventListener("activate", (event) => {
  const old = (names) => names.filter((name) => name.startsWith("widthwise-") && name !== CACHE);
  event.waitUntil(
    caches
      .keys()
      .then((names) => Promise.all(old(names).map((name) => caches.delete(name))))
      .then(() => self.clients.claim()),
  );
});

self.addEventListener("message", (event) => {
  if (event.data === "take over") self.skipWaiting();
});

self.addEventListener("fetch", (event) => {
  if (event.request.method !== "GET" || new URL(event.request.url).origin !== self.location.origin) return;
  const wanted = event.request.mode === "navigate" ? "./" : event.request;
  event.respondWith(caches.open(CACHE).then((cache) => cache.match(wanted)).then((kept) => kept ?? fetch(event.request)));
});
