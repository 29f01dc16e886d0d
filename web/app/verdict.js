/** The strip at the foot: one word, one symbol, one sentence; what is to be mended; the way to the reasons. */

import { button, byId, differs, el, redraw } from "./dom.js";
import { faultPlace, faultText, isAsk } from "./faults.js";
import { outcomeSymbol } from "./symbols.js";
import { say } from "./words.js";

/**
 * @typedef {import("./types.js").Report} Report
 * @typedef {import("./types.js").Fault} Fault
 * @typedef {{report: Report|null, faults: Fault[], earlier: boolean, begun: boolean, engine: string}} Standing
 */

/** @param {Standing} standing "within" and the like; "none" where nothing was judged */
export function outcomeOf({ report }) {
  return report?.verdict?.outcome ?? "none";
}

/** @param {Standing} standing the one sentence under the word */
export function sentenceOf({ report, begun, engine }) {
  if (!report && engine !== "ready") return say(`page.engine.${engine}`);
  if (!begun) return say("page.verdict.nothing_yet");
  if (!report) return say("page.verdict.no_answer");
  const verdict = report.verdict;
  if (!verdict) return say("page.verdict.no_edition");
  return say(`verdict.${verdict.sentence.code}`, verdict.sentence.params);
}

/**
 * @param {object} tools
 * @param {(view: string, target?: string) => void} tools.show
 * @param {(path: string) => void} tools.goTo
 */
export function verdictStrip({ show, goTo }) {
  const host = byId("strip");
  const live = byId("live");
  const problems = el("div", { class: "problems", hidden: true });
  const body = el("div", { class: "strip-body" });
  host.append(problems, body);
  /** @type {ReturnType<typeof setTimeout>|undefined} */
  let later;

  /** @param {Fault[]} faults */
  function list(faults) {
    problems.hidden = faults.length === 0;
    redraw(
      problems,
      el(
        "p",
        { class: "problems-title" },
        say(faults.length === 1 ? "page.problems.one" : "page.problems.many", { count: faults.length }),
      ),
      el(
        "ul",
        {},
        ...faults.slice(0, 4).map((fault) =>
          el(
            "li",
            {},
            button(
              "",
              () => goTo(fault.field),
              {
                class: `problem ${isAsk(fault) ? "ask" : "wrong"}`,
                "data-key": `problem-${fault.field}-${fault.code}`,
                title: faultText(fault),
              },
              faultPlace(fault),
            ),
          ),
        ),
      ),
    );
  }

  /** @param {Standing} standing */
  function keysFor({ report, earlier }) {
    const verdict = report?.verdict;
    if (!report) return [];
    if (!verdict) return [button(say("page.verdict.choose_edition"), () => goTo("edition"), { "data-key": "choose-edition" })];
    return [
      button(say("page.verdict.why"), () => show("decide"), { "data-key": "why" }),
      button(say("page.verdict.not_checked", { count: verdict.not_checked.length }), () => show("decide", "not-checked"), {
        "data-key": "not-checked",
        class: "wide-only",
      }),
      button(say("page.verdict.sign"), () => show("decide", "f-initials"), {
        "data-key": "sign",
        disabled: earlier || verdict.outcome === "unread",
      }),
    ];
  }

  return {
    /** @param {Standing} standing */
    draw(standing) {
      const { report, faults, earlier, begun } = standing;
      const outcome = outcomeOf(standing);
      const verdict = report?.verdict;
      const word = say(`page.outcomes.${outcome}`);
      const sentence = sentenceOf(standing);
      host.dataset["outcome"] = outcome;
      host.classList.toggle("earlier", earlier);
      if (differs(body, [outcome, sentence, earlier, Boolean(report), verdict?.not_checked.length])) {
        redraw(
          body,
          outcomeSymbol(outcome),
          el(
            "div",
            { class: "said" },
            el("p", { class: "word" }, word, earlier ? el("span", { class: "badge" }, say("page.verdict.earlier")) : null),
            el("p", { class: "sentence" }, sentence),
            verdict ? el("p", { class: "caution" }, say("page.verdict.caution")) : null,
          ),
          el("div", { class: "strip-keys" }, ...keysFor(standing)),
        );
      }
      const spoken = begun && verdict && !earlier ? `${word}. ${sentence}` : "";
      if (live.textContent !== spoken) live.textContent = spoken;
      clearTimeout(later);
      // What is half typed is not yet wrong: the list waits for a pause, the field itself does not.
      if (faults.length) later = setTimeout(() => list(faults), 700);
      else list([]);
    },
  };
}
