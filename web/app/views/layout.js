/** The lens as a body: one panel for each section. */

import { el } from "../dom.js";
import { createShelf } from "../panels/shelf.js";
import { NAMES } from "../section-names.js";
import { say } from "../words.js";

/** @param {Omit<Parameters<typeof createShelf>[0], "names"|"lane"|"seen">} tools */
export function layoutView(tools) {
  const shelf = createShelf({ ...tools, names: NAMES, lane: "sections", seen: () => !node.hidden });
  const node = el("div", { class: "view layout" }, el("h2", { class: "hidden" }, say("page.nav.layout")), ...shelf.nodes);
  return { ...shelf, node };
}
