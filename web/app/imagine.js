/** "What would I see if": a cause is touched, and its picture stands in the dials until it is put away. */

import { button, el } from "./dom.js";
import { toJob } from "./job.js";
import { say } from "./words.js";

/**
 * @typedef {{code: string, eyes: string[]}} Cause
 * @typedef {import("./verdict.js").Standing} Standing
 */

/**
 * @param {object} tools
 * @param {import("./types.js").Engine} tools.engine
 * @param {import("./state.js").State} tools.state
 * @param {(faults: import("./types.js").Fault[]) => void} tools.refuse
 * @param {() => void} tools.draw what is imagined has changed
 * @param {() => void} tools.show the dials
 */
export function createImagine({ engine, state, refuse, draw, show }) {
  /** @type {any} the core's answer, while it is shown */
  let imagined = null;
  const said = el("p", {});
  const node = el(
    "div",
    { class: "imagined", hidden: true, role: "status" },
    said,
    button(say("page.imagine.end"), () => end(), { id: "imagine-end" }),
  );

  function end() {
    if (!imagined) return;
    imagined = null;
    node.hidden = true;
    draw();
  }

  // What is typed or touched is of the real lenses again.
  state.subscribe(end);

  return {
    node,
    /** @param {Cause} cause */
    async ask({ code, eyes }) {
      const eye = eyes.length === 1 ? eyes[0] : "both";
      const given = await engine.ask({ do: "imagine", job: toJob(state.entries).job, cause: code, eye }, { lane: "imagine" });
      if (!given) return;
      if (given["errors"]) {
        refuse(given["errors"]);
        return;
      }
      imagined = given;
      said.textContent = say("page.imagine.said", { cause: say(`causes.${given["sentence"].code}`, given["sentence"].params) });
      node.hidden = false;
      draw();
      show();
    },
    /** @param {Standing} standing @returns {Standing} with the imagined pictures in place of the real ones */
    applied(standing) {
      const { report } = standing;
      return report && imagined ? { ...standing, report: { ...report, scenes: { ...report.scenes, ...imagined.scenes } } } : standing;
    },
  };
}
