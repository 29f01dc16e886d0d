/** The next look: the one that would settle most, its results to touch, and what was found by looking before. */

import { button, el, redraw } from "../dom.js";
import { removeBranch } from "../job.js";
import { usedRows } from "../prism-rows.js";
import { say, shown } from "../words.js";

/** @typedef {{result: string, sentence: import("../types.js").Said, leads_to: {text: string}[]}} Result */

/** @param {string} code @param {string|undefined} eye */
const lookText = (code, eye) => say(`looks.${code}`, { eye: eye ? say(`eyes.${eye}`) : "" });

/** @param {{state: import("../state.js").State}} tools */
export function lookCard({ state }) {
  const next = el("div", { class: "look-next" });
  const found = el("div", { class: "look-found" });
  const node = el("div", { class: "look-card" }, next, found);

  /** @param {any} look @param {string} result */
  function enter(look, result) {
    state.change((draft) => {
      const row = `looks[${(usedRows(draft, "looks").at(-1) ?? -1) + 1}]`;
      draft[`${row}.look`] = look.look;
      if (look.eye) draft[`${row}.eye`] = look.eye;
      draft[`${row}.result`] = result;
    });
  }

  /** @param {any} look @param {Result} result */
  function resultNode(look, { result, sentence, leads_to: leads }) {
    return el(
      "li",
      { class: "look-result" },
      button(say(`look_results.${sentence.code}`, sentence.params), () => enter(look, result), { "data-key": `look-${look.look}-${result}` }),
      el("span", { class: "more" }, leads.map((one) => shown(one.text)).join("; ")),
    );
  }

  return {
    node,
    /** @param {any} report */
    show(report) {
      const look = report?.look;
      redraw(
        next,
        ...(look?.look
          ? [
              el("p", { class: "look-said" }, say(`looks.${look.sentence.code}`, look.sentence.params)),
              el("ul", { class: "look-results" }, ...look.results.map((/** @type {Result} */ one) => resultNode(look, one))),
            ]
          : []),
      );
      const rows = usedRows(state.entries, "looks");
      redraw(
        found,
        rows.length ? el("h3", {}, say("page.looks.found")) : null,
        el(
          "ul",
          {},
          ...rows.map((row) => {
            const place = `looks[${row}]`;
            const { [`${place}.look`]: name = "", [`${place}.eye`]: eye, [`${place}.result`]: result } = state.entries;
            const text = say("page.looks.entered", { look: lookText(name, eye), result: say(`look_results.${name}.${result}`) });
            return el(
              "li",
              {},
              el("span", {}, text),
              button(say("page.read.drop"), () => state.change((draft) => removeBranch(draft, place)), {
                "aria-label": say("page.looks.drop", { result: text }),
              }),
            );
          }),
        ),
      );
    },
  };
}
