/** The order: one line, or field by field; what was understood beside each; what a careful person would query. */

import { button, card, el, redraw } from "../dom.js";
import * as fields from "../fields.js";
import { changing } from "../form.js";
import { hasOrder } from "../job.js";
import { noteList } from "../notes.js";
import { prismGroup } from "../prism-rows.js";
import { EYES } from "../types.js";
import { dateText, say, shown } from "../words.js";

/**
 * @typedef {import("../types.js").Report} Report
 * @typedef {import("../keeping.js").KeptJob} KeptJob
 * @typedef {import("../form.js").Form} Form
 * @typedef {import("../state.js").State} State
 */

/** @param {string} eye @param {Form} form @param {State} state */
function eyeCard(eye, form, state) {
  const lines = el("div", { class: "order-echo" });
  const node = el(
    "section",
    { class: "card eye", "aria-labelledby": `order-${eye}` },
    el("h2", { id: `order-${eye}` }, say(`page.lenses.${eye}`)),
    el("div", { class: "grid four" }, ...form.fields(fields.powers(eye))),
    prismGroup(form, state, `${eye}.prism`, "prism"),
    lines,
    el("div", { class: "grid four" }, ...form.fields(fields.positions(eye))),
    el(
      "details",
      { class: "quiet", "data-key": `stated-${eye}` },
      el("summary", {}, say("page.order.stated")),
      el("p", { class: "help" }, say("page.order.stated_help")),
      el("div", { class: "grid four" }, ...form.fields(fields.powers(`${eye}.stated`))),
      prismGroup(form, state, `${eye}.stated.prism`, "stated_prism"),
      form.field(fields.statedThinning(eye)),
    ),
    el(
      "details",
      { class: "quiet", "data-key": `other-${eye}` },
      el("summary", {}, say("page.order.other")),
      el("div", { class: "grid two" }, ...form.fields(fields.nearPd(eye))),
      form.field(fields.partner(eye)),
    ),
  );
  return {
    node,
    /** @param {Report|null} report the lens in full, in both cylinder forms */
    draw(report) {
      redraw(lines, ...(report?.order_lines?.[eye] ?? []).map((line) => el("p", {}, shown(line))));
    },
  };
}

/** @param {Form} form @param {State} state */
function thinningCard(form, state) {
  const amount = el("div", { class: "grid three" });
  const refresh = changing(
    amount,
    (entries) => String(entries["thinning.rule"] === "amount"),
    (entries) => {
      for (const { path } of fields.THINNING_AMOUNT) form.forget(path);
      return entries["thinning.rule"] === "amount" ? form.fields(fields.THINNING_AMOUNT) : [];
    },
  );
  state.subscribe(refresh);
  refresh(state.entries);
  return el("div", {}, ...form.fields(fields.THINNING), amount);
}

/**
 * The edition, its disputed readings and the decision rule. The editions come from the core.
 *
 * @param {Form} form
 * @param {State} state
 */
function rulesCard(form, state) {
  /** @type {any[]} */
  let editions = [];
  const place = el("div");
  const refresh = changing(
    place,
    (entries) => `${entries["edition"] ?? ""} ${editions.length}`,
    (entries) => {
      form.forget("edition");
      const edition = editions.find(({ id }) => id === entries["edition"]);
      const name = (/** @type {string} */ id) =>
        id ? (editions.find((one) => one.id === id)?.name ?? id) : say("page.order.no_edition");
      const select = form.select(
        { path: "edition", kind: "select", label: "edition", values: ["", ...editions.map(({ id }) => id)] },
        name,
      );
      return [select, edition ? aboutEdition(edition, form) : null];
    },
  );
  state.subscribe(refresh);
  refresh(state.entries);
  const node = card("rules", say("page.order.rules"), place, form.field(fields.RULE));
  return {
    node,
    /** @param {any[]} list */
    useEditions(list) {
      editions = list;
      refresh(state.entries);
    },
  };
}

/** @param {any} edition @param {Form} form */
function aboutEdition(edition, form) {
  const states = edition.states.map((/** @type {string} */ state) => say(`page.values.state.${state}`)).join(", ");
  const sources = edition.provenance.map((/** @type {string} */ one) => say(`page.provenance.${one}`)).join(", ");
  return el(
    "div",
    {},
    el("p", { class: "help" }, say("page.order.edition_about", { states, provenance: sources })),
    edition.options.length
      ? el(
          "details",
          { class: "quiet", "data-key": "edition-options" },
          el("summary", {}, say("page.order.options", { count: edition.options.length })),
          ...edition.options.map((/** @type {any} */ option) => optionField(option, form)),
        )
      : null,
  );
}

/** @param {any} option @param {Form} form one disputed reading, with a sentence on each answer */
function optionField(option, form) {
  const why = (/** @type {string} */ value) => option.values.find((/** @type {any} */ one) => one.id === value)?.why;
  const name = (/** @type {string} */ value) => say(`options.${why(value)}`);
  const spec = {
    path: `edition_options.${option.id}`,
    kind: /** @type {const} */ ("select"),
    label: `options.${option.why}`,
    values: option.values.map((/** @type {any} */ value) => value.id),
    empty: option.default,
  };
  return el("div", { class: "option" }, form.select(spec, name));
}

/**
 * @param {object} tools
 * @param {Form} tools.form
 * @param {State} tools.state
 * @param {HTMLElement} tools.line
 * @param {() => void} tools.demonstrate
 * @param {(job: KeptJob) => void} tools.reopen
 */
export function orderView({ form, state, line, demonstrate, reopen }) {
  /** @type {KeptJob[]} */
  let jobs = [];
  const known = el("div", { class: "known", hidden: true });
  const showKnown = changing(
    known,
    (entries) => `${entries["id"] ?? ""} ${entries["signed.at"] ?? ""} ${jobs.length}`,
    (entries) => {
      const job = jobs.find(({ id }) => id && id === entries["id"]?.trim());
      known.hidden = !job || Boolean(entries["signed.at"]);
      if (!job) return [];
      return [
        el("p", {}, say("page.order.known", { at: dateText(job.at), initials: job.initials })),
        button(say("page.actions.reopen"), () => reopen(job), { id: "reopen-known" }),
      ];
    },
  );
  state.subscribe(showKnown);
  const check = el("section", { class: "card check", "aria-labelledby": "order-check", hidden: true });
  const eyes = EYES.map((eye) => eyeCard(eye, form, state));
  const rules = rulesCard(form, state);
  const begin = el(
    "div",
    { class: "begin" },
    el("p", {}, say("page.order.begin")),
    button(say("page.actions.demonstration"), demonstrate, { id: "demonstration" }),
  );
  const node = el(
    "div",
    { class: "view order" },
    el(
      "section",
      { class: "card", "aria-labelledby": "order-line" },
      el("h2", { id: "order-line", class: "hidden" }, say("page.order.line")),
      line,
      begin,
    ),
    check,
    card("order-job", say("page.order.job"), el("div", { class: "job-grid" }, ...form.fields(fields.JOB)), known),
    el("div", { class: "pair" }, ...eyes.map((eye) => eye.node)),
    el(
      "div",
      { class: "pair" },
      card(
        "order-frame",
        say("page.order.frame"),
        thinningCard(form, state),
        el("div", { class: "grid three" }, ...form.fields(fields.FRAME)),
      ),
      rules.node,
    ),
    el("p", { class: "caution" }, say("page.order.caution")),
  );
  return {
    node,
    useEditions: rules.useEditions,
    /** @param {KeptJob[]} list the signed jobs, so that a number that was used is noticed */
    showJobs(list) {
      jobs = list;
      showKnown(state.entries);
    },
    /** @param {import("../verdict.js").Standing} standing */
    draw({ report }) {
      begin.hidden = hasOrder(state.entries);
      for (const eye of eyes) eye.draw(report);
      const notes = (report?.notes ?? []).filter(({ about }) => about === "order");
      check.hidden = !report;
      redraw(
        check,
        el("h2", { id: "order-check" }, say(notes.length ? "page.order.check" : "page.order.check_clean")),
        notes.length ? noteList(notes) : null,
      );
    },
  };
}
