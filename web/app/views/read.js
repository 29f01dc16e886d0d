/** The reading: the pair as it lies there, right lens on the left, and everything that is read of it. */

import { card, differs, el, redraw } from "../dom.js";
import { eyepiece } from "../eyepiece.js";
import * as fields from "../fields.js";
import { lensCard } from "../lens-card.js";
import { noteList } from "../notes.js";
import { prismGroup } from "../prism-rows.js";
import { repeats } from "../repeats.js";
import { EYES } from "../types.js";
import { say, shown } from "../words.js";

/**
 * @typedef {import("../types.js").Report} Report
 * @typedef {import("../form.js").Form} Form
 * @typedef {import("../state.js").State} State
 */

/** @param {string} eye @param {Form} form */
function compensatorFields(eye, form) {
  const place = `readings.${eye}.compensator`;
  return el(
    "div",
    { class: "grid two" },
    form.field({ path: `${place}.amount`, kind: "number", label: "compensator_amount" }),
    form.field({ path: `${place}.base`, kind: "number", label: "base_any" }),
  );
}

/** @param {string} eye @param {Form} form @param {State} state @param {HTMLElement} compensator its fields */
function readingCard(eye, form, state, compensator) {
  const place = `readings.${eye}`;
  return card(
    `typed-${eye}`,
    say(`page.read.typed_${eye}`),
    prismGroup(form, state, `${place}.prism`, "read_prism"),
    repeats(eye, state),
    el("div", { class: "grid four" }, ...form.fields(fields.powers(place))),
    el(
      "details",
      { class: "quiet", "data-key": `compensator-${eye}` },
      el("summary", {}, say("page.read.compensator")),
      compensator,
    ),
    el(
      "details",
      { class: "quiet", "data-key": `slid-${eye}` },
      el("summary", {}, say("page.read.slid")),
      el("p", { class: "help" }, say("page.read.slid_help")),
      el("div", { class: "grid two" }, ...form.fields(fields.slid(eye))),
      form.field(fields.addSide(eye)),
    ),
  );
}

/** @param {Report} report where the point is: one line for both lenses where they say the same */
function pointLines(report) {
  const all = EYES.flatMap((eye) => {
    const point = report[eye]?.point;
    return point ? [{ eye, task: point.task, text: say(`points.${point.code}`, point.params) }] : [];
  });
  const alike = all.length === 2 && all[0]?.text === all[1]?.text;
  return (alike ? all.slice(0, 1) : all).map(({ eye, task, text }) =>
    el(
      "p",
      { class: "point", "data-task": task },
      alike || all.length === 1 ? null : el("strong", {}, `${say(`page.lenses.${eye}`)}: `),
      text,
    ),
  );
}

/**
 * @param {object} tools
 * @param {Form} tools.form
 * @param {State} tools.state
 * @param {ReturnType<typeof import("../steps.js").createSteps>} tools.steps
 * @param {import("../settings.js").Settings} tools.settings
 * @param {{node: HTMLElement, chooser: HTMLElement}} tools.imagine what would be seen if
 */
export function readView({ form, state, steps, settings, imagine }) {
  const summary = el("div", { class: "order-summary" });
  const compensators = { right: compensatorFields("right", form), left: compensatorFields("left", form) };
  const typed = EYES.map((eye) => readingCard(eye, form, state, compensators[eye]));
  /** @type {(open: boolean) => void} */
  const changed = (open) => node.classList.toggle("enlarged", open);
  const large = eyepiece({ state, steps, settings, compensators, changed });
  const cards = EYES.map((eye) => lensCard(eye, { state, steps, enlarge: large.open }));
  const notes = el("div", { class: "reading-notes" });
  const pair = el("div", { class: "pair dials" }, ...cards.map(({ node: one }) => one));
  const node = el(
    "div",
    { class: "view read" },
    el("h2", { class: "hidden" }, say("page.nav.read")),
    large.node,
    summary,
    imagine.node,
    pair,
    notes,
    imagine.chooser,
    el("div", { class: "pair" }, ...typed),
    card(
      "read-how",
      say("page.read.how"),
      el("div", { class: "grid two" }, form.field(fields.READ_AT), form.field(fields.SLID_DISTANCE)),
    ),
  );
  return {
    node,
    /** @param {HTMLElement} wanted is to be seen: where the large eyepiece hides it, that is closed */
    reveal(wanted) {
      if (!large.node.contains(wanted)) large.close();
    },
    /** @param {import("../verdict.js").Standing} standing */
    draw({ report, earlier }) {
      for (const dials of [pair, large.node]) dials.classList.toggle("earlier", earlier);
      large.show(report);
      for (const lens of cards) lens.draw(report);
      const lines = EYES.flatMap((eye) => report?.order_lines?.[eye]?.slice(0, 1) ?? []);
      const points = EYES.map((eye) => report?.[eye]?.point);
      if (differs(summary, [lines, points, shown("0.5")])) {
        redraw(
          summary,
          lines.length ? el("p", { class: "order-lines" }, ...lines.map((line) => el("span", {}, shown(line)))) : null,
          ...(report ? pointLines(report) : []),
        );
      }
      const said = (report?.notes ?? []).filter(({ about }) => about === "reading" || about === "instrument");
      if (differs(notes, [said, shown("0.5")])) redraw(notes, said.length ? noteList(said) : null);
    },
  };
}
