/** Keeping: the next job, files in and out, and the jobs that were signed here. */

import { button, card, el, redraw } from "../dom.js";
import { outcomeSymbol } from "../symbols.js";
import { dateText, say } from "../words.js";

/** @typedef {import("../keeping.js").KeptJob} KeptJob */

/**
 * @param {object} tools
 * @param {() => void} tools.newJob
 * @param {() => void} tools.demonstrate
 * @param {() => void} tools.exportFile
 * @param {(text: string) => string} tools.importText "" or the code of what was wrong
 * @param {() => void} tools.copy
 * @param {() => void} tools.print
 * @param {(job: KeptJob) => void} tools.reopen
 */
export function keepView({ newJob, demonstrate, exportFile, importText, copy, print, reopen }) {
  const said = el("p", { class: "said-import" });
  const paste = el("textarea", { id: "f-paste", rows: 4, autocomplete: "off", autocapitalize: "off", spellcheck: "false" });
  const jobs = el("div");
  const copied = el("div", { class: "copied", hidden: true });

  /** @param {string} text */
  function take(text) {
    const wrong = importText(text);
    said.textContent = say(wrong ? `page.keep.${wrong}` : "page.keep.imported");
    if (!wrong) paste.value = "";
  }
  const file = el("input", {
    id: "f-file",
    type: "file",
    accept: ".json,application/json",
    onchange: async () => {
      const chosen = file.files?.[0];
      if (chosen) take(await chosen.text());
      file.value = "";
    },
  });
  const printKey = button(say("page.actions.print"), print);
  const node = el(
    "div",
    { class: "view keep" },
    card(
      "keep-job",
      say("page.keep.job"),
      el(
        "div",
        { class: "keys-row" },
        button(say("page.actions.new_job"), newJob, { class: "primary", id: "new-job" }),
        button(say("page.actions.copy"), copy, { id: "copy-result" }),
        printKey,
        button(say("page.actions.export"), exportFile, { id: "export" }),
        button(say("page.actions.demonstration"), demonstrate, { id: "demonstration-kept" }),
      ),
      copied,
    ),
    card(
      "keep-import",
      say("page.keep.import"),
      el("div", { class: "field" }, el("label", { for: "f-file" }, say("page.labels.file")), file),
      el("div", { class: "field" }, el("label", { for: "f-paste" }, say("page.labels.paste")), paste),
      button(say("page.actions.import"), () => take(paste.value), { id: "import", "data-repeats": true }),
      said,
    ),
    card("keep-earlier", say("page.keep.earlier"), jobs),
  );
  return {
    node,
    copied,
    /** @param {KeptJob[]} list newest first */
    showJobs(list) {
      redraw(
        jobs,
        list.length === 0 ? el("p", { class: "help" }, say("page.keep.none")) : null,
        el(
          "ul",
          { class: "jobs" },
          ...list.map((job) =>
            el(
              "li",
              {},
              outcomeSymbol(job.outcome),
              el(
                "span",
                { class: "job-name" },
                el("strong", {}, job.id || say("page.keep.unnamed")),
                ` ${say(`page.outcomes.${job.outcome}`)} · ${job.edition} · ${job.initials} · ${dateText(job.at)}`,
              ),
              button(say("page.actions.reopen"), () => reopen(job), { "aria-label": say("page.keep.reopen", { id: job.id }) }),
            ),
          ),
        ),
      );
    },
    /** @param {import("../verdict.js").Standing} standing */
    draw({ report, earlier }) {
      printKey.disabled = !report || earlier;
    },
  };
}
