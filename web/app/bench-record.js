/** What the last check of this bench's lens meter found, kept on this device with its date: it outlives every job. */

import { el, redraw } from "./dom.js";
import { nextJob, settleBench } from "./job.js";
import { dateText, say } from "./words.js";

/**
 * @typedef {import("./types.js").Entries} Entries
 * @typedef {{at: string, fields: Entries, findings: import("./types.js").Said[]}} CheckRecord
 */

const KEY = "check";
const DAY_MS = 86_400_000;
const OLD_DAYS = 90; // common practice: a settled sense does not drift, a zero may

/** @param {string} at @param {Date} now */
export function isOld(at, now) {
  return now.getTime() - new Date(at.replace(" ", "T")).getTime() > OLD_DAYS * DAY_MS;
}

/** @param {{state: import("./state.js").State}} tools */
export function benchRecord({ state }) {
  /** @type {CheckRecord|null} */
  let record = null;
  /** @type {import("./store.js").Store|null} */
  let store = null;
  const node = el("div", { class: "check-record" });

  function draw() {
    const { entries } = state;
    if (!record) {
      redraw(node, el("p", { class: "due" }, say("page.check_bench.never")));
      return;
    }
    const { at, fields, findings } = record;
    const bench = nextJob(entries);
    const changed = Object.entries(fields).some(([path, text]) => (bench[path] ?? "false") !== (text || "false"));
    redraw(
      node,
      el("p", {}, el("strong", {}, say("page.check_bench.checked", { date: dateText(at) }))),
      el("ul", { class: "check-findings" }, ...findings.map(({ code, params }) => el("li", {}, say(`instrument_check.${code}`, params)))),
      changed ? el("p", { class: "due" }, say("page.check_bench.changed")) : null,
      el("p", { class: isOld(at, new Date()) ? "due" : "help" }, say(`page.check_bench.${isOld(at, new Date()) ? "old" : "repeat"}`)),
    );
  }

  return {
    node,
    draw,
    /** @param {CheckRecord} found */
    keep(found) {
      record = found;
      draw();
      store?.put("bench", KEY, found).catch(() => {}); // not kept, as the page says
    },
    /** @param {import("./store.js").Store} opened brings the bench back where the draft does not know it */
    async open(opened) {
      store = opened;
      record = (await opened.all("bench"))[0] ?? null;
      const kept = record;
      if (kept && !nextJob(state.entries)["instrument.checked_on"]) state.change((draft) => settleBench(draft, kept.fields));
      draw();
    },
  };
}
