/**
 * On a server: the service worker that keeps the page, and the offer of another version. Opened from disk, nothing of this
 * happens. Another version is taken when a person says so, and never while a job is in hand.
 */
import { scriptUrl } from "./boot.js";
import { button, byId, el, redraw } from "./dom.js";
import { hasOrder } from "./job.js";
import { say } from "./words.js";

/** @typedef {{program: string, build: string, chosen: boolean, windows: number}} Standing what the service worker answers */

/** Where there is none (no such file, or a browser that keeps nothing), the page needs its server as before. */
async function register() {
  const single = document.documentElement.dataset["single"] !== undefined;
  if (location.protocol === "file:" || single || !navigator.serviceWorker) return null;
  return navigator.serviceWorker.register(scriptUrl("sw.js"), { updateViaCache: "none" }).catch(() => null);
}

/**
 * @param {ServiceWorker} worker
 * @param {"look" | "take"} kind
 * @returns {Promise<Standing>}
 */
function ask(worker, kind) {
  return new Promise((resolve) => {
    const { port1, port2 } = new MessageChannel();
    port1.onmessage = ({ data }) => resolve(data);
    worker.postMessage({ kind }, [port2]);
  });
}

/**
 * @param {object} tools
 * @param {import("./state.js").State} tools.state
 * @param {() => boolean} tools.unsaved whether something typed is still on its way into the store
 */
export function serverFollower({ state, unsaved }) {
  /** @type {ServiceWorkerRegistration|null} */
  let registration = null;
  /** @type {Standing|null} */
  let standing = null;
  let begun = false;
  const offered = el("span");
  const reason = el("span");
  const key = button(say("page.served.take"), take, { id: "take-version" });

  const inHand = () => hasOrder(state.entries) && !state.entries["signed.at"];

  async function take() {
    if (!registration?.active || inHand() || unsaved()) return;
    standing = await ask(registration.active, "take");
    if (standing.chosen) location.reload();
    else draw();
  }

  function draw() {
    if (!standing) return;
    const { program, build, chosen, windows } = standing;
    byId("offer").hidden = chosen;
    if (chosen) {
      redraw(
        byId("served"),
        el("p", { class: "help" }, say("page.served.kept", { program, build })),
        el("p", {}, el("a", { href: "install.html" }, say("page.served.install"))),
      );
      return;
    }
    offered.textContent = say("page.served.newer", { program, build });
    key.disabled = inHand() || windows > 1;
    reason.textContent = key.disabled ? say(inHand() ? "page.served.in_hand" : "page.served.windows") : "";
  }

  async function look() {
    if (!registration?.active) return;
    standing = await ask(registration.active, "look");
    draw();
  }

  function watchComing() {
    const coming = registration?.installing ?? registration?.waiting;
    coming?.addEventListener("statechange", () => {
      if (coming.state === "activated") look();
    });
  }

  return {
    /** Begins once the engine is ready: what is kept then is read beside nothing that anybody waits for. */
    async follow() {
      if (begun) return;
      begun = true;
      registration = await register();
      if (!registration) return;
      byId("offer").append(offered, key, reason);
      registration.addEventListener("updatefound", watchComing);
      watchComing();
      look();
      state.subscribe(draw);
      // Other windows may have been closed meanwhile.
      document.addEventListener("visibilitychange", () => document.visibilityState === "visible" && look());
    },
    /** Asks the server for another version: between two jobs. */
    async update() {
      await registration?.update().catch(() => {}); // the server may be gone
    },
  };
}
