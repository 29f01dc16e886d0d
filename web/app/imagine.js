/** "What would I see if": a cause is touched, and its picture stands in the dials until it is put away. */

import { button, el, redraw } from "./dom.js";
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

  /** @param {string} eye @param {string} [cause] */
  async function ask(eye, cause) {
    const request = { do: "imagine", job: toJob(state.entries).job, eye, ...(cause ? { cause } : {}) };
    const given = await engine.ask(request, { lane: "imagine" });
    if (given?.["errors"]) refuse(given["errors"]);
    return given && !given["errors"] ? given : null;
  }

  /** @param {string} eye @param {string} cause */
  async function look(eye, cause) {
    const given = await ask(eye, cause);
    if (!given) return;
    imagined = given;
    said.textContent = say(given["possible"] ? "page.imagine.said" : "page.imagine.impossible", { cause: given["sentence"] });
    node.hidden = false;
    draw();
    show();
  }

  return {
    node,
    chooser: chooser(ask, look),
    /** @param {Cause} cause */
    ask: ({ code, eyes }) => look(eyes.length === 1 ? (eyes[0] ?? "both") : "both", code),
    /** @param {Standing} standing @returns {Standing} with the imagined pictures in place of the real ones */
    applied(standing) {
      const { report } = standing;
      return report && imagined ? { ...standing, report: { ...report, scenes: { ...report.scenes, ...imagined.scenes } } } : standing;
    },
  };
}

/**
 * Every cause there is, for a lens or both, to be touched before anything is read.
 *
 * @param {(eye: string) => Promise<any>} ask
 * @param {(eye: string, cause: string) => void} look
 */
function chooser(ask, look) {
  let eye = "right";
  /** @type {string[]} */
  let choices = [];
  const list = el("div", { class: "imagine-list" });
  const eyes = ["right", "left", "both"].map((name) =>
    button(say(`page.imagine.${name}`), () => choose(name), { "aria-pressed": String(name === eye), "data-repeats": true }),
  );

  /** @param {string} name */
  function choose(name) {
    eye = name;
    eyes.forEach((key, index) => key.setAttribute("aria-pressed", String(["right", "left", "both"][index] === eye)));
    redraw(
      list,
      ...choices.map((code) =>
        button(say(`causes.${code}`, { eye: say(`eyes.${eye}`) }), () => look(eye, code), { "data-key": `imagine-${code}` }),
      ),
    );
  }

  return el(
    "details",
    {
      class: "card quiet",
      id: "imagine-chooser",
      ontoggle: async () => {
        if (choices.length) return;
        choices = (await ask(eye))?.choices ?? [];
        choose(eye);
      },
    },
    el("summary", {}, say("page.imagine.open")),
    el("div", { class: "keys-row", role: "group", "aria-label": say("page.imagine.which") }, ...eyes),
    list,
  );
}
