/**
 * First of all, before anything else of the page: take away what the page's policy does not cover, make the one Trusted
 * Types policy, and say where the engine's payloads come from.
 */

// A peer connection is not held back by the page's policy, and nothing here needs one.
for (const name of ["RTCPeerConnection", "webkitRTCPeerConnection"]) {
  Object.defineProperty(globalThis, name, { value: undefined, writable: false, configurable: false });
}

/** @typedef {"worker" | "wasm" | "snapshot" | "python"} PayloadName */

/** Where each payload lies in the folder, the id it has in the single file, and the global its script sets. */
const PAYLOADS = {
  worker: { file: "engine/worker.js", id: "", global: "wedgewrightEngine" },
  wasm: { file: "engine/wasm.js", id: "wedgewright-wasm", global: "wedgewrightWasm" },
  snapshot: { file: "engine/snapshot.js", id: "wedgewright-snapshot", global: "wedgewrightSnapshot" },
  python: { file: "engine/python.js", id: "wedgewright-python", global: "wedgewrightPython" },
};

/** What else is read from the folder: the service worker, and the styles where a server sends them under a wrong type. */
const OTHERS = ["sw.js", "styles.js"];

/** The addresses a script or a worker may have: our own files, and a Blob made here. */
const isOurs = (/** @type {string} */ url) =>
  url.startsWith("blob:") || OTHERS.includes(url) || Object.values(PAYLOADS).some(({ file }) => url === file);

const trusted = /** @type {any} */ (globalThis).trustedTypes?.createPolicy("rt", {
  createScriptURL(/** @type {string} */ url) {
    if (!isOurs(url)) {
      throw new TypeError("Not a script of this page.");
    }
    return url;
  },
});

/**
 * The address in the form that the page's policy asks for.
 *
 * @param {string} url
 * @returns {string}
 */
export function scriptUrl(url) {
  return trusted ? trusted.createScriptURL(url) : url;
}

/**
 * @param {string} file one of ours
 * @returns {Promise<unknown>}
 */
export function loadScript(file) {
  return new Promise((resolve, reject) => {
    const script = document.createElement("script");
    script.src = scriptUrl(file);
    script.onload = resolve;
    script.onerror = () => reject(new Error(`${file} cannot be read.`));
    document.head.append(script);
  });
}

/** Resolves when something of the page has been painted, or soon where that is not reported or the page is not shown. */
export function afterFirstPaint() {
  return new Promise((resolve) => {
    const supported = globalThis.PerformanceObserver?.supportedEntryTypes?.includes("paint");
    if (!supported || document.visibilityState === "hidden") {
      setTimeout(resolve);
      return;
    }
    new PerformanceObserver((entries, observer) => {
      if (entries.getEntriesByName("first-contentful-paint").length > 0) {
        observer.disconnect();
        resolve(undefined);
      }
    }).observe({ type: "paint", buffered: true });
    setTimeout(resolve, 3000); // a page that is shown is always painted before that
  });
}

/** Resolves when the whole page has been read: the single file's payloads are then in it. */
function wholePage() {
  return new Promise((resolve) => {
    if (document.readyState === "loading") {
      document.addEventListener("DOMContentLoaded", resolve, { once: true });
    } else {
      resolve(undefined);
    }
  });
}

/**
 * A payload of the engine: a text, or (worker) a function.
 *
 * @param {PayloadName} name
 * @returns {Promise<any>}
 */
export async function payload(name) {
  const { file, id, global } = PAYLOADS[name];
  if (document.documentElement.dataset.single !== undefined) {
    await wholePage();
    performance.mark(`payload-${name}`);
    return id ? document.getElementById(id)?.textContent : /** @type {any} */ (globalThis)[global];
  }
  if (!(global in globalThis)) {
    performance.mark(`payload-${name}`);
    await loadScript(file);
  }
  return /** @type {any} */ (globalThis)[global];
}
