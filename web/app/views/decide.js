/** The decision: the word, the reasons, what is not checked here, and a person's sign-off. */

import { checkList } from "../checks.js";
import { button, card, el, redraw } from "../dom.js";
import { noteList } from "../notes.js";
import { createShelf } from "../panels/shelf.js";
import { WHY } from "../section-names.js";
import { outcomeSymbol } from "../symbols.js";
import { outcomeOf, sentenceOf } from "../verdict.js";
import { dateText, say, shown } from "../words.js";

/**
 * @typedef {import("../types.js").Report} Report
 * @typedef {import("../verdict.js").Standing} Standing
 */

/** @param {Report} report ordered, read and deviation of the pair */
function pairTable(report) {
  const parts = /** @type {const} */ (["vertical", "horizontal"]).flatMap((name) => {
    const part = report.pair?.[name];
    return part ? [{ name, text: part.shown }] : [];
  });
  if (!parts.length) return null;
  const head = ["ordered", "read", "deviation"];
  return el(
    "table",
    { class: "pair-table" },
    el("caption", {}, say("page.decide.pair")),
    el("thead", {}, el("tr", {}, el("td"), ...head.map((name) => el("th", { scope: "col" }, say(`page.check.${name}`))))),
    el(
      "tbody",
      {},
      ...parts.map(({ name, text }) =>
        el(
          "tr",
          {},
          el("th", { scope: "row" }, say(`page.components.${name}`)),
          ...head.map((column) => el("td", {}, shown(text[column] ?? say("page.facts.not_read")))),
        ),
      ),
    ),
  );
}

/** @param {import("../types.js").Verdict} verdict the edition by name and hash, and each disputed reading as it was used */
function editionLines(verdict) {
  const { edition } = verdict;
  return [
    el(
      "p",
      {},
      el("strong", {}, edition.name),
      ` · ${edition.provenance.map((one) => say(`page.provenance.${one}`)).join(", ")} · ${say(`page.values.decision_rule.${edition.rule}`)}`,
    ),
    el("p", { class: "hash" }, say("page.decide.hash", { hash: edition.sha256 })),
    ...edition.options.map((option) =>
      el(
        "p",
        { class: "help" },
        say(option.default ? "page.decide.option_default" : "page.decide.option_chosen", {
          option: say(`options.${option.id}`),
          why: say(`options.${option.why}`),
        }),
      ),
    ),
  ];
}

/** @param {Report|null} report the pair in figures, and every check */
function reasonsOf(report) {
  const found = report?.pair?.thinning_found;
  const verdict = report?.verdict;
  return [
    report ? pairTable(report) : null,
    found ? el("p", {}, say("page.decide.thinning_found", { thinning: found.shown })) : null,
    verdict ? checkList(verdict.checks, verdict.tightest) : el("p", { class: "help" }, say("page.decide.nothing")),
  ];
}

/** @param {import("../types.js").Verdict|undefined} verdict */
function missingList(verdict) {
  const items = verdict?.not_checked.map(({ code, params }) => el("li", {}, say(`not_checked.${code}`, params))) ?? [];
  return items.length ? el("ul", { class: "missing" }, ...items) : null;
}

/** @param {string[]} codes */
export function cautionLines(codes) {
  return codes.map((code) => el("p", { class: "caution" }, say(`cautions.${code}`)));
}

/**
 * @param {object} tools
 * @param {import("../form.js").Form} tools.form
 * @param {import("../state.js").State} tools.state
 * @param {import("../types.js").Engine} tools.engine
 * @param {(field: string) => void} tools.goTo
 * @param {(cause: {code: string, eyes: string[]}) => void} tools.imagine
 * @param {(initials: string) => void} tools.sign
 * @param {() => void} tools.print
 * @param {() => void} tools.copy
 */
export function decideView({ form, state, engine, goTo, imagine, sign, print, copy }) {
  const shelf = createShelf({ names: WHY, lane: "why", seen: () => !node.hidden, form, state, engine, goTo, imagine });
  const head = el("div", { class: "decide-head" });
  const reasons = el("div");
  const notes = el("div");
  const missing = el("div", { id: "not-checked", tabindex: -1 });
  const edition = el("div", { class: "edition" });
  const cautions = el("div", { class: "cautions" });
  const signed = el("p", { class: "signed" });
  const initials = el("input", {
    id: "f-initials",
    type: "text",
    "data-path": "initials",
    "data-kind": "text",
    maxlength: 12,
    autocomplete: "off",
    autocapitalize: "off",
    spellcheck: "false",
  });
  const signKey = button(say("page.verdict.sign"), () => sign(initials.value.trim()), {
    class: "primary",
    id: "sign",
    disabled: true,
  });
  const printKey = button(say("page.actions.print"), print, { id: "print" });
  const why = el("p", { class: "help" });
  /** @type {Standing|null} */
  let standing = null;

  function gate() {
    const outcome = standing ? outcomeOf(standing) : "none";
    const judged = ["within", "outside", "undecided"].includes(outcome);
    const current = Boolean(standing?.report && !standing.earlier);
    signKey.disabled = !judged || !current || !initials.value.trim();
    printKey.disabled = !current;
    why.textContent = say(
      !current ? "page.decide.sign_earlier" : !judged ? "page.decide.sign_unread" : "page.decide.sign_help",
    );
  }
  initials.addEventListener("input", gate);

  const node = el(
    "div",
    { class: "view decide" },
    el("h2", { class: "hidden" }, say("page.nav.decide")),
    head,
    cautions,
    ...shelf.nodes,
    el(
      "div",
      { class: "decide-columns" },
      el("div", { class: "column" }, card("reasons", say("page.decide.reasons"), reasons), notes),
      el(
        "div",
        { class: "column" },
        el(
          "section",
          { class: "card signing", "aria-labelledby": "signing" },
          el("h2", { id: "signing" }, say("page.decide.sign")),
          signed,
          el(
            "div",
            { class: "beside" },
            el("div", { class: "field" }, el("label", { for: "f-initials" }, say("page.labels.initials")), initials),
            signKey,
          ),
          why,
          el("div", { class: "keys-row" }, printKey, button(say("page.actions.copy"), copy, { id: "copy" })),
        ),
        card("missing", say("page.decide.not_checked"), missing),
        card("rules-used", say("page.decide.edition"), edition),
      ),
    ),
  );
  return {
    node,
    follow: shelf.follow,
    sheet: shelf.sheet,
    /** @param {Standing} next */
    draw(next) {
      standing = next;
      shelf.draw(next);
      const { report, earlier } = next;
      const verdict = report?.verdict;
      const outcome = outcomeOf(next);
      node.classList.toggle("earlier", earlier);
      head.dataset["outcome"] = outcome;
      head.classList.toggle("earlier", earlier);
      redraw(
        head,
        outcomeSymbol(outcome),
        el(
          "div",
          {},
          el(
            "p",
            { class: "word" },
            say(`page.outcomes.${outcome}`),
            earlier ? el("span", { class: "badge" }, say("page.verdict.earlier")) : null,
          ),
          el("p", { class: "sentence" }, sentenceOf(next)),
        ),
      );
      redraw(reasons, ...reasonsOf(report));
      const said = (report?.notes ?? []).filter(({ about }) => about === "verdict");
      redraw(notes, said.length ? noteList(said) : null);
      redraw(missing, missingList(verdict));
      redraw(edition, ...(verdict ? editionLines(verdict) : [el("p", { class: "help" }, say("page.verdict.no_edition"))]));
      redraw(cautions, ...cautionLines(verdict?.cautions ?? []));
      const by = state.entries["signed.initials"];
      signed.textContent = by ? say("page.decide.signed", { initials: by, at: dateText(state.entries["signed.at"] ?? "") }) : "";
      gate();
    },
  };
}
