/** The controls of the form, each with a label, the control, and a line for its echo or its error. */

import { el } from "./dom.js";
import { say } from "./words.js";

/** @typedef {import("./fields.js").FieldSpec} FieldSpec */

/**
 * @typedef {object} Control
 * @property {HTMLElement} node
 * @property {HTMLElement} focus what is focused when its error is touched
 * @property {HTMLElement} line
 * @property {(text: string) => void} show
 * @property {(wrong: boolean) => void} mark
 * @property {boolean} [list] whether it holds a whole list, so that what is wrong with a row is said at it
 * @property {boolean} [echoes] whether what was understood is written beside it: what was typed, not what was chosen
 */

/** @param {string} path */
export function idOf(path) {
  return `f-${path.replace(/[^\w]+/g, "-").replace(/-$/, "")}`;
}

/** @param {FieldSpec} spec a word of the page's labels, or one of another group by its whole code */
function labelOf(spec) {
  return say(spec.label.includes(".") ? spec.label : `page.labels.${spec.label}`);
}

/** @param {string} path */
function lineOf(path) {
  return el("span", { class: "line", id: `${idOf(path)}-line` });
}

/**
 * @param {FieldSpec} spec
 * @param {(text: string) => void} typed
 * @returns {Control}
 */
export function textControl(spec, typed) {
  const id = idOf(spec.path);
  const line = lineOf(spec.path);
  const number = spec.kind !== "text";
  const input = el("input", {
    id,
    type: "text",
    inputmode: number ? "decimal" : "text",
    autocomplete: "off",
    autocapitalize: "off",
    spellcheck: "false",
    maxlength: 64,
    "aria-describedby": line.id,
    "data-path": spec.path,
    "data-kind": spec.kind,
    oninput: () => typed(input.value),
  });
  return {
    node: el("div", { class: `field ${number ? "number" : "text"}` }, el("label", { for: id }, labelOf(spec)), input, line),
    focus: input,
    line,
    echoes: true,
    show: (text) => {
      if (input.value.trim() !== text.trim()) input.value = text;
    },
    mark: (wrong) => {
      if (wrong) input.setAttribute("aria-invalid", "true");
      else input.removeAttribute("aria-invalid");
    },
  };
}

/**
 * A choice among few: radio buttons that look like one divided key.
 *
 * @param {FieldSpec} spec
 * @param {(text: string) => void} typed
 * @returns {Control}
 */
export function choiceControl(spec, typed) {
  const line = lineOf(spec.path);
  const inputs = (spec.values ?? []).map((value) =>
    el("input", {
      type: "radio",
      name: spec.path,
      value,
      id: `${idOf(spec.path)}-${value || "blank"}`,
      onchange: () => typed(value === spec.empty ? "" : value),
    }),
  );
  const keys = inputs.map((input) =>
    el("label", { class: "key" }, input, el("span", {}, say(`page.values.${spec.words}.${input.value || "blank"}`))),
  );
  return {
    node: el(
      "fieldset",
      { class: "field choice", "aria-describedby": line.id },
      el("legend", {}, labelOf(spec)),
      el("div", { class: "keys" }, ...keys),
      line,
    ),
    focus: inputs[0] ?? line,
    line,
    show: (text) => {
      for (const input of inputs) input.checked = input.value === (text || spec.empty || "");
    },
    mark: () => {},
  };
}

/**
 * @param {FieldSpec} spec
 * @param {(text: string) => void} typed
 * @returns {Control}
 */
export function flagControl(spec, typed) {
  const line = lineOf(spec.path);
  const input = el("input", {
    type: "checkbox",
    id: idOf(spec.path),
    "aria-describedby": line.id,
    onchange: () => typed(input.checked ? "true" : ""),
  });
  return {
    node: el("div", { class: "field flag" }, el("label", { class: "key" }, input, el("span", {}, labelOf(spec))), line),
    focus: input,
    line,
    show: (text) => {
      input.checked = text === "true";
    },
    mark: () => {},
  };
}

/**
 * @param {FieldSpec} spec with `values`; their names are given, since editions name themselves
 * @param {(text: string) => void} typed
 * @param {(value: string) => string} [nameOf]
 * @returns {Control}
 */
export function selectControl(spec, typed, nameOf = (value) => value) {
  const line = lineOf(spec.path);
  const input = el("select", {
    id: idOf(spec.path),
    "aria-describedby": line.id,
    onchange: () => typed(input.value === spec.empty ? "" : input.value),
  });
  for (const value of spec.values ?? []) input.append(el("option", { value }, nameOf(value)));
  return {
    node: el("div", { class: "field select" }, el("label", { for: input.id }, labelOf(spec)), input, line),
    focus: input,
    line,
    show: (text) => {
      const wanted = text || spec.empty || "";
      const known = [...input.options].some((option) => option.value === wanted);
      // An edition this copy does not know still shows its own name; the core says what is wrong with it.
      if (!known) input.append(el("option", { value: wanted }, wanted));
      input.value = wanted;
    },
    mark: () => {},
  };
}
