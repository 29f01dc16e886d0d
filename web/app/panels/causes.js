/** What happened: the likely causes, each with its probability, and the same summed by place. */

import { button, el, redraw } from "../dom.js";
import { say, shown } from "../words.js";

/**
 * @typedef {object} Cause
 * @property {string} code
 * @property {string[]} eyes
 * @property {number} probability
 * @property {import("../types.js").Said} sentence
 * @property {{shown: string}|null} estimate
 * @property {{sentence: import("../types.js").Said}[]} tied_with
 * @property {Record<string, string>} shown
 */

const MOST = 6;

/** @param {number} probability a bar beside the figure, for those who look rather than read */
function bar(probability) {
  return el("meter", { min: 0, max: 1, value: probability, "aria-hidden": "true", tabindex: -1 });
}

/** @param {import("../types.js").Said} said */
const sentenceOf = ({ code, params }) => say(`causes.${code}`, params);

/** @param {Cause} cause @param {(cause: Cause) => void} imagine */
function causeNode(cause, imagine) {
  const { code, probability, sentence, estimate, tied_with: ties } = cause;
  return el(
    "li",
    { class: "cause" },
    el("span", { class: "cause-share" }, bar(probability), el("strong", {}, shown(cause.shown["probability"]))),
    el(
      "span",
      { class: "cause-said" },
      el("span", {}, sentenceOf(sentence)),
      estimate ? el("span", { class: "more" }, shown(estimate.shown)) : null,
      ties.length ? el("span", { class: "more" }, say("page.causes.ties", { causes: ties.map((one) => sentenceOf(one.sentence)).join(" ") })) : null,
    ),
    cause.eyes.length
      ? button(say("page.causes.imagine"), () => imagine(cause), {
          "aria-label": say("page.causes.imagine_named", { cause: sentenceOf(sentence) }),
          "data-key": `imagine-${code}-${cause.eyes.join("-")}`,
        })
      : null,
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
      const places = /** @type {{place: string, shown: string}[]} */ (report?.cause_places ?? []);
      redraw(
        node,
        causes.length ? el("ol", { class: "cause-list" }, ...causes.slice(0, MOST).map((cause) => causeNode(cause, imagine))) : null,
        places.length
          ? el(
              "p",
              { class: "cause-places" },
              el("strong", {}, say("page.causes.places")),
              ...places.map(({ place, shown: share }) => el("span", {}, `${say(`cause_places.${place}`)} ${shown(share)}`)),
            )
          : null,
        causes.length ? el("p", { class: "help" }, say("page.causes.practice")) : null,
      );
    },
  };
}
