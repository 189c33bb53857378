// Keeps one complete copy of the page. The build fills in the version and the files.
// The index is kept as "./": hosts may answer its file name with a redirect, which
// may not be given to a page that opens. The other names carry a hash of their
// content, so a page of one version can only be given parts of its own version.

const version = "{{version}}";
const files = {{files}};
const prefix = "brinkfield-";
const home = new URL("./", self.location).href;

self.addEventListener("install", (e) => {
  self.skipWaiting();
  e.waitUntil(fill());
});

async function fill() {
  const cache = await caches.open(prefix + version);
  await cache.addAll(files.map((f) => new Request(new URL(f, home), {cache: /\.[0-9a-f]{12}\./.test(f) ? "default" : "reload"})));
  // While a host is being updated the index may still be the old one: then try again at the next visit.
  const index = await (await cache.match(home)).text();
  if (!index.includes(`data-version="${version}"`)) {
    await caches.delete(prefix + version);
    throw new Error("the host is being updated");
  }
}

// The previous copy stays until the next change, for pages that are still starting from it.
self.addEventListener("activate", (e) => {
  e.waitUntil(caches.keys().then((names) => {
    const ours = names.filter((n) => n.startsWith(prefix) && n !== prefix + version);
    return Promise.all(ours.slice(0, -1).map((n) => caches.delete(n)));
  }));
});

async function page(request) {
  const cache = await caches.open(prefix + version);
  return (await cache.match(home)) ?? fetch(request);
}

async function piece(request) {
  return (await caches.match(request, {ignoreSearch: true})) ?? fetch(request);
}

self.addEventListener("fetch", (e) => {
  const url = new URL(e.request.url);
  if (e.request.method !== "GET" || !url.href.startsWith(home)) return;
  const name = url.pathname.slice(new URL(home).pathname.length);
  if (name === "" || name === "index.html") e.respondWith(page(e.request));
  else if (/^[^/]+\.[0-9a-f]{12}\./.test(name)) e.respondWith(piece(e.request));
});
