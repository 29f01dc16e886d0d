/** The traced radii of a rim: one list in the document, one text on the page. Text only; the core reads the numbers. */

import { el } from "../dom.js";
import { idOf } from "../controls.js";
import { removeBranch } from "../job.js";
import { usedRows } from "../prism-rows.js";
import { say } from "../words.js";
import { OUTLINE } from "./fields.js";

/** @typedef {import("../types.js").Entries} Entries */

/**
 * The radii of a pasted list. A comma parts them where points are the decimal signs, or where a space follows it.
 *
 * @param {string} text
 * @returns {string[]}
 */
export function radiiOf(text) {
  const between = text.includes(".") ? /[\s;,]+/ : /(?:,\s|[\s;])+/;
  return text.split(between).filter(Boolean);
}

/** @param {Entries} draft @param {string} text the list of the document becomes that of the text, in place */
export function putRadii(draft, text) {
  removeBranch(draft, OUTLINE);
  radiiOf(text).forEach((radius, index) => {
    draft[`${OUTLINE}[${index}]`] = radius;
  });
}

/** @param {Entries} entries */
export function radiiIn(entries) {
  return usedRows(entries, OUTLINE).map((index) => entries[`${OUTLINE}[${index}]`] ?? "");
}

/** @param {import("../form.js").Form} form @param {import("../state.js").State} state */
export function outlineField(form, state) {
  const line = el("span", { class: "line", id: `${idOf(OUTLINE)}-line` });
  const area = el("textarea", {
    id: idOf(OUTLINE),
    rows: 2,
    autocomplete: "off",
    autocapitalize: "off",
    spellcheck: "false",
    "aria-describedby": line.id,
    oninput: () => state.change((draft) => putRadii(draft, area.value), OUTLINE),
  });
  const count = el("p", { class: "help" });
  const node = el(
    "div",
    { class: "field" },
    el("label", { for: area.id }, say("page.panels.labels.outline_mm")),
    area,
    line,
    count,
  );
  const show = () => {
    const radii = radiiIn(state.entries);
    if (radiiOf(area.value).join(" ") !== radii.join(" ")) area.value = radii.join("  ");
    count.textContent = radii.length ? say("page.panels.radii", { count: radii.length }) : say("page.panels.radii_help");
  };
  state.subscribe(show);
  show();
  /** @type {import("../controls.js").Control} */
  const control = {
    node,
    focus: area,
    line,
    list: true,
    show: () => {},
    mark: (wrong) => {
      if (wrong) area.setAttribute("aria-invalid", "true");
      else area.removeAttribute("aria-invalid");
    },
  };
  return form.adopt(OUTLINE, control);
}
