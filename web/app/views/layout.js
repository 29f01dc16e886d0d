/** The lens as a body: one panel for each section, which says its answer closed and shows it opened. */

import { el } from "../dom.js";
import { toJob } from "../job.js";
import { createKeeper } from "../panels/keeper.js";
import { NAMES } from "../section-names.js";
import { createPanel } from "../panels/panel.js";
import { printedSections } from "../panels/sheet.js";
import { say } from "../words.js";

/**
 * @param {object} tools
 * @param {import("../form.js").Form} tools.form
 * @param {import("../state.js").State} tools.state
 * @param {import("../types.js").Engine} tools.engine
 * @param {(field: string) => void} tools.goTo
 */
export function layoutView({ form, state, engine, goTo }) {
  const keeper = createKeeper({ engine, names: NAMES, first: () => opened(), changed: show });
  const panels = NAMES.map((name) => createPanel(name, { form, state, goTo }));
  const said = el("p", { class: "help layout-said", role: "status" });
  const list = el("div", { class: "panels" }, ...panels.map(({ node }) => node));
  const node = el("div", { class: "view layout" }, el("h2", { class: "hidden" }, say("page.nav.layout")), said, list);
  /** @type {import("../verdict.js").Standing|null} */
  let standing = null;
  /** @type {unknown[]} */
  let editions = [];

  // Whoever types goes first.
  state.subscribe(() => keeper.cancel());

  const opened = () => panels.filter((panel) => panel.node.open).map(({ name }) => name);

  /** Sections are worked out for whoever looks at them: on this view, or on paper. */
  function follow() {
    if (!standing?.report) keeper.forget();
    else if (!standing.earlier && (!node.hidden || opened().length)) keeper.follow(toJob(state.entries).job, editions);
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
    node,
    /** @param {import("../verdict.js").Standing} next @param {unknown[]} shop the first answer is there: now the sections */
    follow(next, shop) {
      standing = next;
      editions = shop;
      follow();
      show();
    },
    /** @param {import("../verdict.js").Standing} next */
    draw(next) {
      standing = next;
      follow();
      show();
    },
    sheet: () => printedSections(opened(), keeper.report, keeper.current),
  };
}
