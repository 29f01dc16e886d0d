/** The fields that the panels rest on, in folded groups beside them. */

import { el } from "../dom.js";
import { EYES } from "../types.js";
import { say } from "../words.js";
import * as fields from "./fields.js";
import { outlineField } from "./outline.js";

/** @typedef {import("../form.js").Form} Form */
/** @typedef {import("../state.js").State} State */

/** @param {string} name @param {...(Node|null)} children */
function group(name, ...children) {
  return el(
    "details",
    { class: "quiet group", "data-key": `group-${name}` },
    el("summary", {}, say(`page.panels.groups.${name}`)),
    ...children,
  );
}

/** @param {import("../fields.js").FieldSpec[]} specs @param {Form} form */
function grid(specs, form) {
  return el("div", { class: "grid three" }, ...form.fields(specs));
}

/** @param {string} code */
function help(code) {
  return el("p", { class: "help" }, say(`page.panels.help.${code}`));
}

/** @param {(eye: string) => Node[]} content of each lens, the right one on the left */
function lenses(content) {
  return el(
    "div",
    { class: "pair" },
    ...EYES.map((eye) =>
      el("div", { class: "lens-fields" }, el("h3", {}, say(`page.lenses.${eye}`)), ...content(eye)),
    ),
  );
}

/** @type {Record<string, (form: Form, state: State) => (Node|null)[]>} */
const GROUPS = {
  layout: (form, state) => [
    group("rim", ...form.fields(fields.RIM), outlineField(form, state)),
    group(
      "segments",
      lenses((eye) => {
        const [shape, ...sizes] = fields.segment(eye);
        return [...(shape ? form.fields([shape]) : []), grid(sizes, form)];
      }),
    ),
    group("shift", help("shift"), grid(fields.SHIFT, form)),
  ],
  field: (form) => [group("limit", grid(fields.LIMIT, form))],
  near: (form) => [group("reading", grid(fields.READING, form))],
  edge: (form) => [
    group("body", grid(fields.body("lens"), form)),
    group("bodies", help("bodies"), lenses((eye) => [form.field(fields.design(eye)), grid(fields.body(eye), form)])),
  ],
  wear: (form) => [group("worn", grid(fields.WORN, form))],
  surfacing: (form) => [group("block", help("block"), lenses((eye) => [grid(fields.surfacing(eye), form)]))],
};

/** @param {string} name of the section @param {Form} form @param {State} state */
export function groupsOf(name, form, state) {
  return GROUPS[name]?.(form, state) ?? [];
}
