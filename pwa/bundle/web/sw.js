// Keeps one complete version of the app for use without a network. A newer version is fetched beside it and waits.
"use strict";
const FILES = __FILES__; // path -> content hash, of everything the app needs
const REVISION = "__REVISION__";
const PREFIX = "tapwright-";
const CACHE = PREFIX + REVISION;
const BASE = new URL("./", self.location).href;
const LIST = `${BASE}__files__`; // under this address a cache keeps the list of what it holds

const address = (path) => BASE + (path === "index.html" ? "" : path);

// Chromium takes the smaller build of the drawing engine, other browsers the full one.
const CHROMIUM = typeof Intl.v8BreakIterator === "function";
const wanted = (path) => !path.startsWith("canvaskit/") || path.startsWith("canvaskit/chromium/") === CHROMIUM;

const otherCaches = async () =>
  (await caches.keys()).filter((name) => name.startsWith(PREFIX) && name !== CACHE);

async function install() {
  const former = [];
  for (const name of await otherCaches()) {
    const cache = await caches.open(name);
    const list = await cache.match(LIST);
    if (list) former.push({ cache, files: await list.json() });
  }
  const unchanged = async (path) => {
    const holder = former.find(({ files }) => files[path] === FILES[path]);
    return holder?.cache.match(address(path));
  };
  const fetched = async (path) => {
    const answer = await fetch(address(path), { cache: "no-cache" });
    if (!answer.ok) throw new Error(`${path}: ${answer.status}`);
    return answer;
  };
  const cache = await caches.open(CACHE);
  for (const path of Object.keys(FILES).filter(wanted)) {
    await cache.put(address(path), (await unchanged(path)) ?? (await fetched(path)));
  }
  await cache.put(LIST, new Response(JSON.stringify(FILES)));
}

async function activate() {
  for (const name of await otherCaches()) await caches.delete(name);
  await self.clients.claim();
}

async function answer(request) {
  const url = new URL(request.url);
  const path = url.origin + url.pathname;
  const cache = await caches.open(CACHE);
  if (request.mode === "navigate") {
    if (path === `${BASE}index.html`) return (await cache.match(BASE)) ?? fetch(request);
    const page = (await cache.match(path)) ?? (await fetch(request).catch(() => null));
    // The app's own routes stand behind #: any other path is an old or mistyped link, and leads to the start.
    return page?.ok ? page : Response.redirect(BASE);
  }
  return (await cache.match(path, { ignoreVary: true })) ?? fetch(request);
}

self.addEventListener("install", (event) => event.waitUntil(install()));
self.addEventListener("activate", (event) => event.waitUntil(activate()));
self.addEventListener("message", ({ data }) => { if (data === "take over") self.skipWaiting(); });
self.addEventListener("fetch", (event) => {
  const { method, url } = event.request;
  if (method === "GET" && url.startsWith(BASE)) event.respondWith(answer(event.request));
});
