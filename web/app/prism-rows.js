/**
 * A prism as the person writes it: two parts (in/out and up/down), an amount with a base of 0 to 360, the 180
 * notation with its word, or a plain list. The way belongs to the page; the document holds what was typed.
 */

import { choiceControl } from "./controls.js";
import { el } from "./dom.js";
import { changing } from "./form.js";
import { removeBranch } from "./job.js";
import { say } from "./words.js";

/** @typedef {import("./types.js").Entries} Entries */
/** @typedef {"parts"|"base"|"notation"|"list"} Way */
/** @typedef {{index: number, base: "horizontal"|"vertical"|"degrees"|"notation"|"any"}} Row */

/** @type {Way[]} */
export const WAYS = ["parts", "base", "notation", "list"];
const MOST = 8;
const HORIZONTAL = new Set(["in", "out"]);
const VERTICAL = new Set(["up", "down"]);

/** @param {Entries} entries @param {string} path @returns {number[]} the rows that hold something */
export function usedRows(entries, path) {
  const rows = new Set();
  for (const place of Object.keys(entries)) {
    if (place.startsWith(`${path}[`)) rows.add(Number.parseInt(place.slice(path.length + 1), 10));
  }
  return [...rows].sort((a, b) => a - b);
}

/** @param {Entries} entries @param {string} path @param {number} index */
function baseOf(entries, path, index) {
  return entries[`${path}[${index}].base`] ?? "";
}

/** @param {Entries} entries @param {string} path @returns {Way} as chosen, or as what is there was written */
export function wayOf(entries, path) {
  const chosen = entries[`page.way.${path}`];
  if (chosen) return /** @type {Way} */ (chosen);
  const rows = usedRows(entries, path);
  const bases = rows.map((row) => baseOf(entries, path, row));
  const side = rows.some((row) => Object.keys(entries).some((at) => at.startsWith(`${path}[${row}].base.`)));
  if (side) return rows.length === 1 ? "notation" : "list";
  const words = bases.every((base) => !base || HORIZONTAL.has(base) || VERTICAL.has(base));
  const twice =
    bases.filter((base) => HORIZONTAL.has(base)).length > 1 || bases.filter((base) => VERTICAL.has(base)).length > 1;
  if (words && !twice && rows.length <= 2 && rows.every((row) => row < 2)) return "parts";
  return rows.length === 1 && rows[0] === 0 ? "base" : "list";
}

/** @param {Entries} entries @param {string} path @returns {Row[]} */
export function rowsOf(entries, path) {
  const way = wayOf(entries, path);
  if (way === "base") return [{ index: 0, base: "degrees" }];
  if (way === "notation") return [{ index: 0, base: "notation" }];
  if (way === "parts") {
    const across = [0, 1].find((row) => HORIZONTAL.has(baseOf(entries, path, row)));
    const along = [0, 1].find((row) => VERTICAL.has(baseOf(entries, path, row)));
    const vertical = along ?? (across === 1 ? 0 : 1);
    return [
      { index: across ?? 1 - vertical, base: "horizontal" },
      { index: vertical, base: "vertical" },
    ];
  }
  const used = usedRows(entries, path);
  const count = Math.min(MOST, Math.max(1, (used.at(-1) ?? -1) + 2));
  return Array.from({ length: count }, (_, index) => ({
    index,
    base: Object.keys(entries).some((at) => at.startsWith(`${path}[${index}].base.`)) ? "notation" : "any",
  }));
}

/**
 * @param {Row} row
 * @param {string} path
 * @returns {import("./fields.js").FieldSpec[]}
 */
function specsOf(row, path) {
  const place = `${path}[${row.index}]`;
  const label = row.base === "horizontal" || row.base === "vertical" ? row.base : "prism_amount";
  const amount = { path: `${place}.amount`, kind: /** @type {const} */ ("number"), label };
  if (row.base === "horizontal" || row.base === "vertical") {
    const values = row.base === "horizontal" ? ["in", "out"] : ["up", "down"];
    return [amount, { path: `${place}.base`, kind: "choice", label: "base", words: "base", values }];
  }
  if (row.base === "notation") {
    return [
      amount,
      { path: `${place}.base.degrees`, kind: "number", label: "base_180" },
      { path: `${place}.base.side`, kind: "choice", label: "side", words: "base", values: ["up", "down", "in", "out"] },
    ];
  }
  const name = row.base === "degrees" ? "base_360" : "base_any";
  return [amount, { path: `${place}.base`, kind: "number", label: name }];
}

/**
 * The rows of one prism, drawn anew when the way or the rows change.
 *
 * @param {import("./form.js").Form} form
 * @param {import("./state.js").State} state
 * @param {string} path e.g. "right.prism"
 * @param {string} name the word above it
 */
export function prismGroup(form, state, path, name) {
  const rows = el("div", { class: "prism-rows" });
  const ways = choiceControl({ path: `page.way.${path}`, kind: "choice", label: "way", words: "way", values: WAYS }, (way) =>
    state.change((draft) => {
      if (usedRows(draft, path).length && wayOf(draft, path) !== way) removeBranch(draft, path);
      draft[`page.way.${path}`] = way;
    }),
  );
  ways.node.classList.add("ways");
  const refresh = changing(
    rows,
    (entries) => JSON.stringify(rowsOf(entries, path)),
    (entries) => {
      form.forget(`${path}[`);
      return rowsOf(entries, path).map((row) => {
        const nodes = form.fields(specsOf(row, path));
        for (const node of nodes) {
          const input = node.querySelector("input[type=text]");
          input?.setAttribute("data-key", input.id);
        }
        return el("div", { class: `prism-row ${row.base}` }, ...nodes);
      });
    },
  );
  state.subscribe((entries) => {
    refresh(entries);
    ways.show(wayOf(entries, path));
  });
  refresh(state.entries);
  ways.show(wayOf(state.entries, path));
  return el(
    "fieldset",
    { class: "prism" },
    el("legend", {}, say(`page.labels.${name}`)),
    rows,
    el("details", { class: "quiet", "data-key": `way-${path}` }, el("summary", {}, say("page.actions.way")), ways.node),
  );
}

/**
 * Puts a prism that the core answered with (touch, step) into a draft, as rows of words where it is words.
 *
 * @param {Entries} draft
 * @param {string} path
 * @param {{amount: string, base?: string|null}[]} parts
 */
export function putPrism(draft, path, parts) {
  removeBranch(draft, path);
  const words = parts.every(({ base }) => !base || HORIZONTAL.has(base) || VERTICAL.has(base));
  parts.forEach(({ amount, base }, row) => {
    const index = words && base ? (HORIZONTAL.has(base) ? 0 : 1) : row;
    draft[`${path}[${index}].amount`] = String(amount);
    if (base) draft[`${path}[${index}].base`] = String(base);
  });
  delete draft[`page.way.${path}`];
}
