/** The opened sections for paper, on a sheet behind the first. */

import { el } from "../dom.js";
import { EYES } from "../types.js";
import { say } from "../words.js";
import { notesOf, printedAsks, tableOf, titleOf } from "./content.js";
import { panelName } from "./names.js";
import { captionOf, commonSize, isWide, legendOf, printedPicture } from "./picture.js";

/** @typedef {import("./keeper.js").SectionReport} SectionReport */

/** @param {string} name @param {SectionReport} report */
function pictures(name, report) {
  const scenes = report.scenes?.[name];
  if (!scenes) return null;
  const lenses = commonSize(EYES.flatMap((eye) => scenes[eye] ?? []));
  const shown = /** @type {const} */ (["right", "left", "pair"]).flatMap((place) => {
    const scene = scenes[place];
    if (!scene) return [];
    const size = place === "pair" ? commonSize([scene]) : lenses;
    return [el("figure", { class: `picture ${place} ${isWide(size) ? "wide" : ""}` }, captionOf(name, place), printedPicture(`print-${name}-${place}`, scene, size))];
  });
  return el("div", { class: "scene-pictures" }, ...shown, legendOf(name, Object.values(scenes)));
}

/** @param {string} name @param {SectionReport} report */
function sectionPart(name, report) {
  const section = report.sections?.[name];
  if (!section) return null;
  return el(
    "section",
    { class: "sheet-section" },
    el("h2", {}, panelName(name), ": ", el("span", { class: "panel-answer" }, titleOf(section))),
    pictures(name, report),
    tableOf(section.rows, panelName(name)),
    printedAsks(section.asks),
    notesOf(section.notes),
  );
}

/**
 * @param {string[]} names of the opened panels
 * @param {SectionReport|null} report
 * @param {boolean} current whether the report is that of the job as it is now
 * @returns {HTMLElement|null}
 */
export function printedSections(names, report, current) {
  if (!names.length) return null;
  if (!report || !current) return el("p", { class: "sheet-refused" }, say("page.panels.not_printed"));
  return el("div", { class: "sheet-sections" }, ...names.map((name) => sectionPart(name, report)));
}
