/** The sheet: one page a job, built when it is printed, out of what is on the screen. */

import { checkName } from "./checks.js";
import { drawScene } from "./dial.js";
import { el, redraw, svg } from "./dom.js";
import { mainFacts, moreFacts } from "./facts.js";
import { factList } from "./lens-card.js";
import { noteList } from "./notes.js";
import { outcomeSymbol } from "./symbols.js";
import { EYES } from "./types.js";
import { outcomeOf, sentenceOf } from "./verdict.js";
import { cautionLines } from "./views/decide.js";
import { dateText, say, shown } from "./words.js";

/**
 * @typedef {import("./types.js").Report} Report
 * @typedef {import("./types.js").Entries} Entries
 */

/** @param {Report} report @param {import("./types.js").Eye} eye */
function lensPart(report, eye) {
  const lens = report[eye];
  if (!lens) return null;
  const pictures = /** @type {const} */ (["dial", "close"]).map((name) => {
    const scene = report.scenes?.[eye]?.[name];
    const picture = svg("svg", { class: `dial ${name}`, "aria-hidden": "true" });
    if (scene) drawScene(picture, scene, `print-${name}-${eye}`);
    return picture;
  });
  const lines = (report.order_lines?.[eye] ?? []).map((line) => el("p", { class: "sheet-order" }, shown(line)));
  return el(
    "section",
    { class: "sheet-lens" },
    el("h2", {}, say(`page.lenses.${eye}`)),
    ...lines,
    el("div", { class: "sheet-dials" }, ...pictures),
    factList([...mainFacts(lens), ...moreFacts(lens)]),
  );
}

/** @param {import("./types.js").Verdict} verdict every check in one line */
function checkTable(verdict) {
  const columns = /** @type {const} */ (["ordered", "read", "deviation", "limit", "doubt"]);
  return el(
    "table",
    { class: "sheet-checks" },
    el(
      "thead",
      {},
      el(
        "tr",
        {},
        el("th", { scope: "col" }, say("page.check.name")),
        ...columns.map((name) => el("th", { scope: "col" }, say(`page.print.${name}`))),
        el("th", { scope: "col" }, say("page.check.outcome")),
        el("th", { scope: "col" }, say("page.check.clause")),
      ),
    ),
    el(
      "tbody",
      {},
      ...verdict.checks.map((check) =>
        el(
          "tr",
          {},
          el("th", { scope: "row" }, checkName(check)),
          ...columns.map((name) => el("td", {}, shown(check.shown[name] ?? ""))),
          el("td", {}, say(check.counts === false ? "page.check.information" : `page.outcomes.${check.outcome}`)),
          el("td", { class: "sheet-clause" }, `${say(`page.print.${check.provenance}`)}: ${check.clause}`),
        ),
      ),
    ),
  );
}

/** @param {import("./types.js").Verdict} verdict the edition by name and hash, each disputed reading by what was used */
function editionPart({ edition }) {
  const provenance = edition.provenance.map((one) => say(`page.provenance.${one}`)).join(", ");
  const options = edition.options.map(
    (option) => `${option.id} = ${option.value}${option.default ? "" : ` (${say("page.print.chosen")})`}`,
  );
  return el(
    "div",
    { class: "sheet-small" },
    el(
      "p",
      {},
      el("strong", {}, edition.name),
      ` · ${provenance} · ${say(`page.values.decision_rule.${edition.rule}`)} · sha256 ${edition.sha256}`,
    ),
    el("p", { class: "sheet-inputs" }, ...options.map((option) => el("span", {}, option))),
  );
}

/** @param {Entries} entries what was typed, by its path: the record of what the answer rests on */
function inputs(entries) {
  const lists = new Set(["frame.outline_mm"]);
  /** @type {Map<string, string>} the rows of a long list in one line */
  const lines = new Map();
  for (const [path, text] of Object.entries(entries)) {
    const list = path.replace(/\[\d+\]$/, "");
    const name = lists.has(list) ? list : path;
    lines.set(name, lines.has(name) ? `${lines.get(name)} ${text}` : text);
  }
  const typed = [...lines].filter(([path]) => !/^(page|line|signed)\b/.test(path));
  return el(
    "p",
    { class: "sheet-inputs" },
    ...typed.sort(([a], [b]) => (a < b ? -1 : 1)).map(([path, text]) => el("span", {}, `${path} = ${text}`)),
  );
}

/** @param {Entries} entries @param {string} at */
function sheetHead(entries, at) {
  const names = [
    ["state", "state"],
    ["lens.design", "design"],
  ].flatMap(([path, group]) => {
    const value = entries[path ?? ""];
    return value ? [say(`page.values.${group}.${value}`)] : [];
  });
  return el(
    "header",
    {},
    el("h1", {}, say("page.print.title", { id: entries["id"] ?? "" })),
    el("p", {}, [...names, dateText(at)].join(" · ")),
  );
}

/** @param {import("./types.js").Verdict} verdict */
function verdictPart(verdict) {
  const missing = verdict.not_checked.map(({ code, params }) => say(`not_checked.${code}`, params)).join(" · ");
  return [checkTable(verdict), el("p", { class: "sheet-small" }, say("page.decide.not_checked"), ": ", missing)];
}

/**
 * @param {HTMLElement} host
 * @param {object} what
 * @param {import("./verdict.js").Standing} what.standing
 * @param {Entries} what.entries
 * @param {string} what.hash of the job document
 * @param {string} what.at
 * @param {(HTMLElement|null)[]} what.sections those whose panels stand open
 */
export function drawSheet(host, { standing, entries, hash, at, sections }) {
  const { report, earlier } = standing;
  if (!report || earlier) {
    redraw(host, el("p", { class: "sheet-refused" }, say("page.print.refused")));
    return;
  }
  const { verdict } = report;
  host.classList.toggle("tight", (verdict?.checks.length ?? 0) + report.notes.length > 13);
  const outcome = outcomeOf(standing);
  const by = entries["signed.initials"];
  redraw(
    host,
    entries["demonstration"] === "true" ? el("p", { class: "sheet-demonstration" }, say("page.demonstration.banner")) : null,
    sheetHead(entries, at),
    el("div", { class: "sheet-pair" }, ...EYES.map((eye) => lensPart(report, eye))),
    el(
      "div",
      { class: "sheet-verdict", "data-outcome": outcome },
      outcomeSymbol(outcome),
      el("div", {}, el("p", { class: "word" }, say(`page.outcomes.${outcome}`)), el("p", {}, sentenceOf(standing))),
    ),
    ...(verdict ? verdictPart(verdict) : []),
    report.notes.length ? noteList(report.notes) : null,
    verdict ? editionPart(verdict) : null,
    inputs(entries),
    el(
      "p",
      { class: "sheet-small" },
      say("page.print.made_by", { program: report.made_by.program, contract: report.made_by.contract, hash }),
    ),
    el(
      "div",
      { class: "sheet-sign" },
      el("p", {}, say("page.print.initials")),
      el("p", { class: "sheet-box" }, by ? `${by} · ${dateText(entries["signed.at"] ?? "")}` : ""),
    ),
    el("div", { class: "cautions" }, ...cautionLines(verdict?.cautions ?? [])),
    ...sections,
  );
}
