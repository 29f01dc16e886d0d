/** Prism anywhere: points put in by touching the picture or by typing, each with what is read there. */

import { button, el, redraw } from "../dom.js";
import { changing } from "../form.js";
import { removeBranch } from "../job.js";
import { usedRows } from "../prism-rows.js";
import { EYES } from "../types.js";
import { eyeName, say } from "../words.js";
import { point } from "./fields.js";

/** @typedef {import("../types.js").Entries} Entries */

const MOST = 200;

/** @param {string} eye */
const listOf = (eye) => `points.${eye}`;

/** @param {Entries} entries @param {string} eye @returns {number} the row that comes after those in use */
export function nextRow(entries, eye) {
  return (usedRows(entries, listOf(eye)).at(-1) ?? -1) + 1;
}

/** @param {Entries} entries @param {string} eye the rows in use and one that is free */
export function pointRows(entries, eye) {
  const used = usedRows(entries, listOf(eye));
  return used.length < MOST ? [...used, nextRow(entries, eye)] : used;
}

/** @param {Entries} draft @param {string} eye @param {{x: string, y: string}} place in mm, in place */
export function putPoint(draft, eye, { x, y }) {
  if (usedRows(draft, listOf(eye)).length >= MOST) return;
  const row = `${listOf(eye)}[${nextRow(draft, eye)}]`;
  draft[`${row}.right_mm`] = x;
  draft[`${row}.up_mm`] = y;
}

/** @param {any} found one point of the report: the exact prism first, the thin one beside it where it differs */
function readThere(found) {
  if (!found) return [];
  const thin = say("page.panels.thin", { prism: found.thin.shown.text });
  const exact = found.exact ? say("page.panels.exact", { prism: found.exact.shown.text }) : "";
  return [
    el("span", { class: exact ? "" : "only" }, thin),
    exact ? el("strong", {}, exact) : null,
    found.in_segment ? el("span", {}, say("page.panels.in_segment")) : null,
    found.beyond_thin ? el("span", {}, say("page.panels.beyond_thin")) : null,
  ];
}

/**
 * @param {import("../types.js").Eye} eye
 * @param {import("../form.js").Form} form
 * @param {import("../state.js").State} state
 */
function pointList(eye, form, state) {
  /** @type {HTMLElement[]} */
  let results = [];
  const rows = el("div", { class: "point-rows" });
  const refresh = changing(
    rows,
    (entries) => pointRows(entries, eye).join(" "),
    (entries) => {
      form.forget(`${listOf(eye)}[`);
      const used = usedRows(entries, listOf(eye));
      results = used.map(() => el("p", { class: "point-reads" }));
      return pointRows(entries, eye).map((row, index) => rowNode(row, index, used.includes(row)));
    },
  );

  /** @param {number} row @param {number} index @param {boolean} used */
  function rowNode(row, index, used) {
    const fields = form.fields(point(eye, row));
    for (const field of fields) {
      const input = field.querySelector("input");
      input?.setAttribute("data-key", input.id);
    }
    const drop = () => state.change((draft) => removeBranch(draft, `${listOf(eye)}[${row}]`));
    return el(
      "div",
      { class: "point-row" },
      ...fields,
      used
        ? button(say("page.panels.drop"), drop, {
            "aria-label": say("page.panels.drop_point", { number: index + 1, eye: eyeName(eye) }),
          })
        : null,
      results[index] ?? null,
    );
  }

  state.subscribe(refresh);
  refresh(state.entries);
  const clear = button(
    say("page.panels.clear_points"),
    () => state.change((draft) => removeBranch(draft, listOf(eye))),
    { "aria-label": say("page.panels.clear_points_of", { eye: eyeName(eye) }), "data-repeats": true },
  );
  return {
    node: el("div", { class: "points" }, el("h3", {}, say(`page.lenses.${eye}`)), rows, clear),
    /** @param {any[]} found the report's points of this lens, in the order of the rows in use */
    show(found) {
      results.forEach((place, index) => redraw(place, ...readThere(found[index])));
      clear.hidden = results.length === 0;
    },
  };
}

/** @param {{form: import("../form.js").Form, state: import("../state.js").State}} tools the points of both lenses */
export function pointLists({ form, state }) {
  const lists = EYES.map((eye) => ({ eye, ...pointList(eye, form, state) }));
  return {
    node: el("div", { class: "pair" }, ...lists.map((list) => list.node)),
    /** @param {any} report */
    show(report) {
      for (const { eye, show } of lists) show(report?.[eye]?.field?.points ?? []);
    },
  };
}
