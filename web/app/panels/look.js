/** The next look: the one that would settle most, its results to touch, and what was found by looking before. */

import { button, el, redraw } from "../dom.js";
import { removeBranch } from "../job.js";
import { usedRows } from "../prism-rows.js";
import { say, shown } from "../words.js";

/** @typedef {import("../types.js").Said} Said */
/** @typedef {{result: string, sentence: Said, leads_to: {sentence: Said, shown: string}[]}} Result */

/** @param {Said} said @param {string} group */
const saying = ({ code, params }, group) => say(`${group}.${code}`, params);

/** @param {{state: import("../state.js").State}} tools */
export function lookCard({ state }) {
  const next = el("div", { class: "look-next" });
  const found = el("div", { class: "look-found" });
  const node = el("div", { class: "look" }, next, found);

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
      button(saying(sentence, "look_results"), () => enter(look, result), { "data-key": `look-${look.look}-${result}` }),
      el("span", { class: "more" }, leads.map((one) => `${saying(one.sentence, "causes")} ${shown(one.shown)}`).join("; ")),
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
              el("p", { class: "look-said" }, saying(look.sentence, "looks")),
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
            const { [`${place}.look`]: name, [`${place}.result`]: result } = state.entries;
            const text = say(`look_results.${name}.${result}`);
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
