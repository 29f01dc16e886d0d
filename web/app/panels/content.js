/** What a section says, as nodes: the table, the notes, what is asked for. The same on the screen and on paper. */

import { button, el } from "../dom.js";
import { say, shown } from "../words.js";
import { fieldName, usualText } from "./names.js";

/**
 * @typedef {{code: string, right: string, left: string, pair: string, assumed: boolean}} Row
 * @typedef {{field: string, usual: string, used: boolean}} Ask
 * @typedef {import("../types.js").Said} Said
 * @typedef {{title: Said, rows: Row[], asks: Ask[], notes: Said[]}} Section
 */

const MOST_SHOWN = 6;
const COLUMNS = /** @type {const} */ (["right", "left", "pair"]);

/** @param {Section} section the answer in one line */
export function titleOf({ title }) {
  return say(`section_titles.${title.code}`, title.params);
}

/**
 * The rows, the right lens's column on the left. The roles are said because a narrow screen sets the rows as blocks.
 *
 * @param {Row[]} rows
 * @param {string} caption
 */
export function tableOf(rows, caption) {
  const columns = COLUMNS.filter((column) => rows.some((row) => row[column]));
  if (!columns.length) return null;
  const head = columns.map((column) => el("th", { scope: "col", role: "columnheader" }, say(`page.panels.columns.${column}`)));
  const table = el(
    "table",
    { class: "section-table", role: "table" },
    el("caption", { class: "hidden" }, caption),
    el(
      "thead",
      { role: "rowgroup" },
      el("tr", { role: "row" }, el("th", { scope: "col", role: "columnheader" }, el("span", { class: "hidden" }, say("page.panels.columns.what"))), ...head),
    ),
    el("tbody", { role: "rowgroup" }, ...rows.map((row) => rowOf(row, columns))),
  );
  const assumed = rows.some((row) => row.assumed);
  return el("div", {}, table, assumed ? el("p", { class: "assumed-note" }, say("page.panels.assumed")) : null);
}

/** @param {Row} row @param {readonly ("right"|"left"|"pair")[]} columns */
function rowOf(row, columns) {
  return el(
    "tr",
    { role: "row", class: row.assumed ? "assumed" : "" },
    el(
      "th",
      { scope: "row", role: "rowheader" },
      say(`section_rows.${row.code}`),
      row.assumed ? el("span", { class: "assumed-mark" }, say("page.panels.assumed_mark")) : null,
    ),
    ...columns.map((column) =>
      el(
        "td",
        { role: "cell", class: row[column] ? "" : "blank" },
        el("span", { class: "cell-name", "aria-hidden": "true" }, say(`page.panels.columns.${column}`)),
        el("span", {}, ...piecesOf(row[column])),
      ),
    ),
  );
}

/** @param {string} text broken, where there is no room, first at its own pauses */
function piecesOf(text) {
  return shown(text)
    .split(/(?<=;) |(?= \()/)
    .flatMap((piece) => [el("span", { class: "piece" }, piece.trim()), " "]);
}

/** @param {Said[]} notes */
export function notesOf(notes) {
  if (!notes.length) return null;
  return el(
    "ul",
    { class: "notes section-notes" },
    ...notes.map(({ code, params }) => el("li", { class: "note" }, say(`section_notes.${code}`, params))),
  );
}

/** @param {Ask} ask */
export function askText({ field, usual, used }) {
  const code = usual ? (used ? "usual_taken" : "usual_offered") : "needed";
  return say(`page.panels.${code}`, { field: fieldName(field), usual: usualText(usual) });
}

/** @param {Ask} ask whether its usual value can stand in the field: one text, not one for each lens */
function isOneValue({ usual }) {
  return Boolean(usual) && !usual.includes(", ");
}

/** @typedef {{goTo: (field: string) => void, take: (asks: Ask[]) => void}} Acts */

/** @param {string} name of the section @param {Ask} ask @param {Acts} acts */
function askNode(name, ask, { goTo, take }) {
  const field = fieldName(ask.field);
  const usual = usualText(ask.usual);
  return el(
    "li",
    { class: `ask ${ask.used ? "used" : "open"}` },
    el("span", { class: "ask-text" }, askText(ask)),
    button(say("page.panels.enter"), () => goTo(ask.field), {
      "aria-label": say("page.panels.enter_field", { field }),
      "data-key": `enter-${name}-${ask.field}`,
      "data-ask": ask.field,
    }),
    isOneValue(ask)
      ? button(say("page.panels.take"), () => take([ask]), {
          "aria-label": say("page.panels.take_field", { usual, field }),
          "data-take": ask.field,
        })
      : null,
  );
}

/**
 * What is missing first, in full; then the usual values in use, folded where they are many.
 *
 * @param {string} name of the section
 * @param {Ask[]} asks
 * @param {Acts} acts
 */
export function asksOf(name, asks, acts) {
  if (!asks.length) return null;
  const used = asks.filter((ask) => ask.used);
  const open = asks.filter((ask) => !ask.used);
  const usual = asks.filter(isOneValue);
  const listOf = (/** @type {Ask[]} */ some) => el("ul", { class: "ask-list" }, ...some.map((ask) => askNode(name, ask, acts)));
  const folded =
    used.length > MOST_SHOWN
      ? el(
          "details",
          { class: "quiet", "data-key": `usual-${name}` },
          el("summary", {}, say("page.panels.usual_many", { count: used.length })),
          listOf(used),
        )
      : listOf(used);
  return el(
    "div",
    { class: "asks" },
    el("h3", {}, say("page.panels.asks")),
    open.length ? listOf(open) : null,
    used.length ? folded : null,
    usual.length > 1
      ? button(say("page.panels.take_all", { count: usual.length }), () => acts.take(usual), { class: "take-all" })
      : null,
  );
}

/** @param {Ask[]} asks for paper: what rests on usual values, and what is missing */
export function printedAsks(asks) {
  return asks.length ? el("ul", { class: "sheet-asks" }, ...asks.map((ask) => el("li", {}, askText(ask)))) : null;
}
