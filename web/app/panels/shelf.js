/** A list of panels, one for each section, which says its answer closed and shows it opened; asked for when looked at. */

import { el } from "../dom.js";
import { toJob } from "../job.js";
import { say } from "../words.js";
import { createKeeper } from "./keeper.js";
import { createPanel } from "./panel.js";
import { printedSections } from "./sheet.js";

/** @typedef {import("../verdict.js").Standing} Standing */

/**
 * @param {object} tools
 * @param {string[]} tools.names of the sections, in the order of their panels
 * @param {string} tools.lane of their questions
 * @param {() => boolean} tools.seen whether the view they stand in is shown
 * @param {import("../form.js").Form} tools.form
 * @param {import("../state.js").State} tools.state
 * @param {import("../types.js").Engine} tools.engine
 * @param {(field: string) => void} tools.goTo
 * @param {(cause: {code: string, eyes: string[]}) => void} [tools.imagine]
 */
export function createShelf({ names, lane, seen, form, state, engine, goTo, imagine = () => {} }) {
  const keeper = createKeeper({ engine, lane, names, first: () => opened(), changed: show });
  const panels = names.map((name) => createPanel(name, { form, state, goTo, imagine }));
  const said = el("p", { class: "help panels-said", role: "status" });
  const list = el("div", { class: "panels" }, ...panels.map(({ node }) => node));
  /** @type {Standing|null} */
  let standing = null;
  /** @type {unknown[]} */
  let editions = [];

  // Whoever types goes first.
  state.subscribe(() => keeper.cancel());

  const opened = () => panels.filter((panel) => panel.node.open).map(({ name }) => name);

  /** Sections are worked out for whoever looks at them: on their view, or on paper. */
  function follow() {
    if (!standing?.report) keeper.forget();
    else if (!standing.earlier && (seen() || opened().length)) keeper.follow(toJob(state.entries).job, editions);
    else keeper.cancel();
  }

  /** Whether what stands in the panels is not of the job as it is now, and will not be by itself. */
  function isEarlier() {
    return Boolean(standing?.earlier) || (keeper.report !== null && keeper.failed);
  }

  /** @param {boolean} earlier */
  function standingText(earlier) {
    if (!standing?.begun) return say("page.panels.no_order");
    if (earlier) return say("page.panels.earlier");
    return keeper.failed ? say("page.panels.failed") : "";
  }

  function show() {
    const earlier = isEarlier();
    const text = standingText(earlier);
    if (said.textContent !== text) said.textContent = text;
    list.classList.toggle("earlier", earlier);
    list.dataset["current"] = String(keeper.current);
    const waiting = standing?.report && !keeper.current && !keeper.failed ? "…" : "";
    for (const panel of panels) panel.show(keeper.report, waiting);
  }

  return {
    nodes: [said, list],
    /** @param {Standing} next @param {unknown[]} shop the first answer is there: now the sections */
    follow(next, shop) {
      standing = next;
      editions = shop;
      follow();
      show();
    },
    /** @param {Standing} next */
    draw(next) {
      standing = next;
      follow();
      show();
    },
    sheet: () => printedSections(opened(), keeper.report, keeper.current),
  };
}
