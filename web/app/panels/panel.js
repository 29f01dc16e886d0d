/** One panel: closed it says its answer, opened it shows the pictures, the figures, what is asked for, and its fields. */

import { el, redraw } from "../dom.js";
import { EYES } from "../types.js";
import { causeList } from "./causes.js";
import { say, shown } from "../words.js";
import { asksOf, notesOf, tableOf, titleOf } from "./content.js";
import { groupsOf } from "./groups.js";
import { lookCard } from "./look.js";
import { panelName } from "./names.js";
import { captionOf, commonSize, createPicture, legendOf } from "./picture.js";
import { pointLists, putPoint } from "./points.js";

/**
 * @typedef {import("./keeper.js").SectionReport} SectionReport
 * @typedef {import("../types.js").Scene} Scene
 * @typedef {{form: import("../form.js").Form, state: import("../state.js").State, goTo: (field: string) => void, imagine: (cause: {code: string, eyes: string[]}) => void}} Tools
 */

/** @type {import("./content.js").Section} what is shown of a section while there is no answer */
const NOTHING = { title: { code: "" }, rows: [], asks: [], notes: [] };
/** @type {Record<string, (tools: Tools) => {node: HTMLElement, show: (report: SectionReport|null) => void}>} what only one panel has */
const OWN = { field: pointLists, causes: causeList, look: lookCard };
/** Rows that the panel shows in its own way; on paper they stand in the table. */
const SAID_ELSEWHERE = new Set(["field.point", "causes.first", "causes.second", "causes.third", "causes.as-ordered", "look.result", "look.other"]);
const PLACES = /** @type {const} */ (["right", "left", "pair"]);

/** @param {string} name @param {Tools} tools */
function picturesOf(name, { state }) {
  /** @param {"right"|"left"|"pair"} place */
  const touchOf = (place) =>
    name === "field" && place !== "pair"
      ? (/** @type {{x: string, y: string}} */ spot) => state.change((draft) => putPoint(draft, place, spot))
      : undefined;
  const pictures = PLACES.map((place) => {
    const picture = createPicture(`scene-${name}-${place}`, touchOf(place));
    return { place, ...picture, frame: el("figure", { class: `picture ${place}` }, captionOf(name, place), picture.node) };
  });
  const legend = el("div");
  const hint = name === "field" ? el("p", { class: "help" }, say("page.panels.touch")) : null;
  const node = el("div", { class: "scene-pictures" }, hint, ...pictures.map(({ frame }) => frame), legend);
  return {
    node,
    /** @param {Record<string, Scene>|undefined} scenes */
    show(scenes) {
      const given = Object.values(scenes ?? {});
      node.hidden = !given.length;
      const lenses = commonSize(EYES.flatMap((eye) => scenes?.[eye] ?? []));
      for (const { place, frame, show } of pictures) {
        const scene = scenes?.[place] ?? null;
        frame.hidden = !scene;
        const what = say("page.panels.picture", { panel: panelName(name), eye: say(`page.eyes.${place}`) });
        show(scene, place === "pair" && scene ? commonSize([scene]) : lenses, what);
      }
      redraw(legend, given.length ? legendOf(name, given) : null);
    },
  };
}

/** @param {string} name of the section @param {Tools} tools */
export function createPanel(name, tools) {
  const { form, state, goTo } = tools;
  const answer = el("span", { class: "panel-answer" });
  const pictures = picturesOf(name, tools);
  const own = OWN[name]?.(tools);
  const [table, notes, asks] = [el("div"), el("div"), el("div")];
  /** @type {SectionReport|null} */
  let report = null;
  let stale = false;
  let look = "";
  const node = el(
    "details",
    {
      class: "panel card",
      id: `panel-${name}`,
      ontoggle: () => {
        if (node.open && stale) drawBody();
      },
    },
    el("summary", {}, el("span", { class: "panel-name" }, panelName(name)), answer),
    pictures.node,
    own?.node,
    table,
    asks,
    el("div", { class: "groups" }, ...groupsOf(name, form, state)),
    notes,
  );

  /** @param {import("./content.js").Ask[]} list one touch takes the usual values into their fields */
  function take(list) {
    state.change((draft) => {
      for (const { field, usual } of list) draft[field] = usual;
    });
  }

  function drawBody() {
    stale = false;
    const section = report?.sections?.[name] ?? NOTHING;
    const rows = section.rows.filter(({ code }) => !SAID_ELSEWHERE.has(code));
    pictures.show(report?.scenes?.[name]);
    own?.show(report);
    redraw(table, tableOf(rows, panelName(name)));
    redraw(notes, notesOf(section.notes));
    redraw(asks, asksOf(name, section.asks, { goTo, take }));
  }

  return {
    name,
    node,
    /** @param {SectionReport|null} next @param {string} waiting what the title says while there is no answer */
    show(next, waiting) {
      const section = next?.sections?.[name];
      const text = section ? titleOf(section) : waiting;
      if (answer.textContent !== text) answer.textContent = text;
      const written = shown("0.5");
      const same = next && report && section === report.sections?.[name];
      if ((same || next === report) && written === look) return;
      [report, look] = [next, written];
      stale = true;
      if (node.open) drawBody();
    },
  };
}
