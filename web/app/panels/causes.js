/** What happened: the likely causes, each with its probability and the causes it cannot be told from. */

import { button, el, redraw, svg } from "../dom.js";
import { say, shown } from "../words.js";

/** @typedef {{code: string, eyes: string[]}} Part a cause and the lenses it is in */
/** @typedef {Part & {with: Part[]}} Name one cause, or two that came together */
/**
 * @typedef {object} Cause
 * @property {string} code
 * @property {string[]} eyes
 * @property {number} probability
 * @property {{shown: string}|null} estimate
 * @property {Name[]} tied_with causes that predict the same readings
 * @property {Record<string, string>} shown
 */

const MOST = 6;
const MOST_TIES = 3;
/** What has no picture of its own. */
const UNSEEN = new Set(["as-ordered", "none-of-these", "all-others"]);

/** @param {number} probability a bar beside the figure, for those who look rather than read */
function bar(probability) {
  return svg(
    "svg",
    { class: "share-bar", viewBox: "0 0 1 1", preserveAspectRatio: "none", "aria-hidden": "true", focusable: "false" },
    svg("rect", { width: probability, height: 1 }),
  );
}

/** @param {Part} part */
function partName({ code, eyes }) {
  return say(`causes.${code}`, { eye: say(`eyes.${eyes.length > 1 ? "both" : eyes[0]}`) });
}

/** @param {Cause} cause @param {(cause: Cause) => void} imagine */
function causeNode(cause, imagine) {
  const { code, eyes, probability, estimate, tied_with: ties, shown: texts } = cause;
  const alone = ties.filter((name) => !name.with.length);
  const tied = alone.slice(0, MOST_TIES).map(partName).join("; ");
  const more = ties.length - Math.min(alone.length, MOST_TIES);
  return el(
    "li",
    { class: "cause" },
    el("span", { class: "cause-share" }, bar(probability), el("strong", {}, shown(texts["probability"]))),
    el(
      "span",
      { class: "cause-said" },
      el("span", {}, shown(texts["text"])),
      estimate ? el("span", { class: "more" }, shown(estimate.shown)) : null,
      tied ? el("span", { class: "more" }, say(more ? "page.causes.ties_more" : "page.causes.ties", { causes: tied, count: more })) : null,
    ),
    UNSEEN.has(code)
      ? null
      : button(say("page.causes.imagine"), () => imagine(cause), {
          "aria-label": say("page.causes.imagine_named", { cause: texts["text"] }),
          "data-key": `imagine-${code}-${eyes.join("-")}`,
        }),
  );
}

/** @param {{imagine: (cause: Cause) => void}} tools */
export function causeList({ imagine }) {
  const node = el("div", { class: "causes" });
  return {
    node,
    /** @param {any} report */
    show(report) {
      const causes = /** @type {Cause[]} */ (report?.causes ?? []);
      redraw(
        node,
        causes.length ? el("ol", { class: "cause-list" }, ...causes.slice(0, MOST).map((cause) => causeNode(cause, imagine))) : null,
        causes.length ? el("p", { class: "help" }, say("page.causes.practice")) : null,
      );
    },
  };
}
