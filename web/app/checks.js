/** Every check opens to what was ordered and read, the limit, where it comes from, and how sure the answer is. */

import { el } from "./dom.js";
import { outcomeSymbol } from "./symbols.js";
import { eyeName, has, say, shown } from "./words.js";

/** @typedef {import("./types.js").Check} Check */

/** @param {Check} check */
export function checkName(check) {
  const code = `checks.${check.id}`;
  return say("page.check.name_of", { check: has(code) ? say(code) : check.id, eye: eyeName(check.eye) });
}

/** @param {Check} check the deviation against its limit, or that it was not read */
function figure(check) {
  const { deviation, limit } = check.shown;
  return deviation && limit ? say("page.check.of", { deviation, limit, unit: check.unit }) : "";
}

/** @param {Check} check */
export function checkRows(check) {
  const { shown: text } = check;
  const names = /** @type {const} */ (["ordered", "read", "deviation", "limit", "margin", "uncertainty", "doubt"]);
  /** @type {[string, string][]} */
  const rows = names.flatMap((name) => (text[name] ? [[say(`page.check.${name}`), shown(text[name])]] : []));
  if (check.row) rows.push([say("page.check.row"), has(`rows.${check.row}`) ? say(`rows.${check.row}`) : check.row]);
  rows.push([say("page.check.clause"), check.clause]);
  rows.push([say("page.check.provenance"), say(`page.provenance.${check.provenance}`)]);
  rows.push([say("page.check.source"), say(check.measured ? "page.check.measured" : "page.check.computed")]);
  return rows;
}

/** @param {Check} check @param {boolean} tightest */
function checkItem(check, tightest) {
  return el(
    "details",
    {
      class: `check ${check.outcome}${check.counts === false ? " information" : ""}`,
      "data-key": `check-${check.id}-${check.eye}-${check.component ?? ""}-${check.row}`,
    },
    el(
      "summary",
      { "data-key": `summary-${check.id}-${check.eye}-${check.component ?? ""}-${check.row}` },
      outcomeSymbol(check.outcome),
      el(
        "span",
        { class: "check-name" },
        checkName(check),
        tightest ? el("span", { class: "badge" }, say("page.check.tightest")) : null,
      ),
      el("span", { class: "check-figure" }, figure(check)),
      el(
        "span",
        { class: "check-word" },
        say(check.counts === false ? "page.check.information" : `page.outcomes.${check.outcome}`),
      ),
    ),
    el(
      "dl",
      { class: "rows" },
      ...checkRows(check).map(([name, value]) => el("div", {}, el("dt", {}, name), el("dd", {}, value))),
    ),
  );
}

/**
 * The checks, those of one group under one heading: one of them holding is enough.
 *
 * @param {Check[]} checks
 * @param {number|null} tightest
 */
export function checkList(checks, tightest) {
  /** @type {Map<string, {check: Check, index: number}[]>} */
  const groups = new Map();
  checks.forEach((check, index) => groups.set(check.group, [...(groups.get(check.group) ?? []), { check, index }]));
  return el(
    "div",
    { class: "checks" },
    ...[...groups.values()].map((members) =>
      el(
        "div",
        { class: "check-group" },
        members.length > 1 ? el("p", { class: "help" }, say("page.check.alternatives")) : null,
        ...members.map(({ check, index }) => checkItem(check, index === tightest)),
      ),
    ),
  );
}
