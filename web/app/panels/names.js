/** What sections and their fields are called on the page. */

import { has, say, shown } from "../words.js";

/** @param {string} name of a section */
export function panelName(name) {
  return say(`section_titles.${name}.name`);
}

/** @param {string} path of a field of the job, e.g. "right.segment.height_mm" @returns {string} its name, with its lens */
export function fieldName(path) {
  const steps = path.replace(/\[\d+\]/g, "").split(".");
  const last = steps.at(-1) ?? "";
  const own = last === "shape" ? (steps.includes("segment") ? "segment_shape" : "rim_shape") : last;
  // As it stands at the field itself; else as the core calls it.
  const code = [`page.panels.labels.${own}`, `page.labels.${own}`, `fields.${last}`].find(has);
  const name = code ? say(code) : last;
  const eye = steps.find((step) => step === "right" || step === "left");
  return eye ? say("page.panels.field_of", { field: name, eye: say(`page.eyes.${eye}`) }) : name;
}

/** @param {string} usual a usual value: a figure, or a word that has its own name */
export function usualText(usual) {
  for (const group of ["rim_shape", "segment_shape", "design"]) {
    if (has(`page.values.${group}.${usual}`)) return say(`page.values.${group}.${usual}`);
  }
  return shown(usual);
}
