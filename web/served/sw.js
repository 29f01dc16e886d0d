/**
 * The service worker, for the folder on a server only: it keeps one whole copy of a build in a cache named by the build's
 * content, and answers from the copy that the person has chosen, so that the page needs its server no longer.
 *
 * A newer build is fetched beside the older one, and answers only when a person has taken it. Which one has been taken is
 * itself kept in a cache: a worker that was only "waiting" would take over by itself once all windows are closed.
 *
 * From the page: {kind: "look"} or {kind: "take"} with a port to answer at.
 * To the page: {program, build, chosen, windows}: the build that this worker brought, whether it is the one in use, and how
 * many windows of the program are open.
 */

/** What the page has to do with a worker's globals; the compiler's own names for them stand in a library for workers only. */
const worker = /** @type {any} */ (globalThis);

const SCOPE = worker.registration.scope;
/** A server may hold several folders of this program, and all share one store of caches. */
const MARK = `wedgewright ${SCOPE} `;
const OWN = MARK + BUILD.id;
const CHOICE = `${MARK}chosen`;

/** @type {Record<string, string>} by the end of a file's name; what the server says of it does not matter */
const TYPES = {
  html: "text/html; charset=utf-8",
  css: "text/css; charset=utf-8",
  js: "text/javascript; charset=utf-8",
  json: "application/manifest+json",
  txt: "text/plain; charset=utf-8",
};

/** @param {string} name */
const addressOf = (name) => new URL(name, SCOPE).href;

/** @param {ArrayBuffer} bytes @returns {Promise<string>} in hexadecimal */
async function digestOf(bytes) {
  const digest = await crypto.subtle.digest("SHA-256", bytes);
  return [...new Uint8Array(digest)].map((byte) => byte.toString(16).padStart(2, "0")).join("");
}

/**
 * A file of this build, exactly as it was built: what the browser has still kept of the page's own loading will do, else the
 * server is asked. On a share that is being replaced, the one may be there before the other; then nothing is kept.
 *
 * @param {string} name
 * @param {string} digest
 * @returns {Promise<Response>}
 */
async function readChecked(name, digest) {
  for (const cache of /** @type {RequestCache[]} */ (["default", "reload"])) {
    const response = await fetch(addressOf(name), { cache, redirect: "error" });
    const bytes = await response.arrayBuffer();
    if (response.ok && (await digestOf(bytes)) === digest) {
      const type = TYPES[name.slice(name.lastIndexOf(".") + 1)] ?? "application/octet-stream";
      return new Response(bytes, { headers: { "Content-Type": type } });
    }
  }
  throw new Error(`${name} is not the one of this build.`);
}

/** Nothing is kept before everything is there. */
async function keepOwn() {
  /** @type {[string, Response][]} */
  const read = [];
  for (const [name, digest] of Object.entries(BUILD.files)) {
    read.push([addressOf(name), await readChecked(name, digest)]);
  }
  const cache = await caches.open(OWN);
  for (const [address, response] of read) {
    await cache.put(address, response);
  }
}

/** @returns {Promise<string>} the name of the cache in use, or "" */
async function chosenCache() {
  const kept = await (await caches.open(CHOICE)).match(SCOPE);
  return kept ? kept.text() : "";
}

async function choose() {
  await (await caches.open(CHOICE)).put(SCOPE, new Response(OWN));
}

/** Lets go of every copy that is neither in use nor the newest. */
async function tidy() {
  const needed = new Set([OWN, CHOICE, await chosenCache()]);
  const old = (await caches.keys()).filter((name) => name.startsWith(MARK) && !needed.has(name));
  await Promise.all(old.map((name) => caches.delete(name)));
}

async function begin() {
  if (!(await caches.has(await chosenCache()))) {
    await choose();
  }
  await tidy();
}

/** @param {Request} request */
async function answer(request) {
  const { origin, pathname } = new URL(request.url);
  const address = origin + pathname;
  const cache = await caches.open(await chosenCache());
  return (await cache.match(address === SCOPE ? addressOf("index.html") : address)) ?? fetch(request);
}

async function openWindows() {
  const windows = await worker.clients.matchAll({ type: "window", includeUncontrolled: true });
  return windows.filter((/** @type {{url: string}} */ { url }) => url.startsWith(SCOPE)).length;
}

/** @param {{data: {kind: string}, ports: MessagePort[]}} message */
async function reply({ data, ports }) {
  const windows = await openWindows();
  // Another window may be in the middle of a job, and would be answered from two builds at once.
  if (data.kind === "take" && windows === 1) {
    await choose();
    await tidy();
  }
  const chosen = (await chosenCache()) === OWN;
  ports[0]?.postMessage({ program: BUILD.program, build: BUILD.id.slice(0, 8), chosen, windows });
}

worker.addEventListener("install", (/** @type {any} */ event) => {
  event.waitUntil(keepOwn().then(() => worker.skipWaiting()));
});
worker.addEventListener("activate", (/** @type {any} */ event) => event.waitUntil(begin()));
worker.addEventListener("message", (/** @type {any} */ event) => event.waitUntil(reply(event)));
worker.addEventListener("fetch", (/** @type {any} */ event) => {
  if (event.request.method === "GET" && event.request.url.startsWith(SCOPE)) {
    event.respondWith(answer(event.request));
  }
});
