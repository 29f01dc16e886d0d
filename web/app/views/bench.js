/** This bench: its lens meter, how well it reads, and how this tablet shows things. */

import { button, card, el, redraw } from "../dom.js";
import { faultText } from "../faults.js";
import { choiceControl } from "../controls.js";
import * as fields from "../fields.js";
import { benchRecord } from "../bench-record.js";
import { instrumentCheck } from "../instrument-check.js";
import { readFile } from "../job.js";
import { LANGUAGES } from "../language.js";
import { startSentences } from "../start-words.js";
import { say } from "../words.js";

/**
 * @param {object} tools
 * @param {import("../form.js").Form} tools.form
 * @param {import("../settings.js").Settings} tools.settings
 * @param {() => void} tools.settingsChanged
 * @param {() => void} tools.erase
 * @param {ReturnType<typeof import("../editions.js").shopEditions>} tools.editions
 * @param {import("../state.js").State} tools.state
 * @param {import("../types.js").Engine} tools.engine
 */
export function benchView({ form, state, engine, settings, settingsChanged, erase, editions }) {
  const record = benchRecord({ state });
  const check = instrumentCheck({ form, state, engine, taken: record.keep });
  const shop = shopCard(editions);
  /** @param {"theme"|"language"|"decimal"|"keypad"|"bases"|"date"|"paper"} name @param {string[]} values */
  const setting = (name, values) => {
    const control = choiceControl(
      { path: `setting.${name}`, kind: "choice", label: `setting_${name}`, words: `setting_${name}`, values },
      (value) => {
        Object.assign(settings, { [name]: value });
        settingsChanged();
      },
    );
    control.show(settings[name]);
    return control.node;
  };
  const started = el("p", { class: "help", id: "started" });
  const confirm = el(
    "div",
    { class: "confirm", hidden: true },
    el("p", {}, say("page.bench.erase_sure")),
    button(say("page.bench.erase_yes"), erase, { class: "danger", id: "erase-yes" }),
  );
  const eraseKey = button(
    say("page.bench.erase"),
    () => {
      confirm.hidden = !confirm.hidden;
      eraseKey.setAttribute("aria-expanded", String(!confirm.hidden));
    },
    { "aria-expanded": "false", id: "erase" },
  );
  return {
    showEditions: shop.show,
    /** @param {import("../engine.js").Start} start */
    started: (start) => (started.textContent = startSentences(start).join(" ")),
    openStore: record.open,
    draw() {
      record.draw();
      check.ask();
    },
    node: el(
      "div",
      { class: "view bench" },
      card(
        "bench-meter",
        say("page.bench.meter"),
        el("p", { class: "help" }, say("page.bench.meter_help")),
        ...form.fields(fields.INSTRUMENT),
        el("div", { class: "grid four" }, ...form.fields(fields.INSTRUMENT_NUMBERS)),
        el(
          "details",
          { class: "quiet", "data-key": "instrument-settled" },
          el("summary", {}, say("page.check_bench.settled")),
          ...form.fields(fields.INSTRUMENT_TARGET),
          el("div", { class: "grid two" }, ...form.fields(fields.INSTRUMENT_ZERO)),
        ),
      ),
      card("bench-check", say("page.check_bench.title"), el("p", { class: "help" }, say("page.check_bench.help")), record.node, check.node),
      card(
        "bench-uncertainty",
        say("page.bench.uncertainty"),
        el("p", { class: "help" }, say("page.bench.uncertainty_help")),
        el("div", { class: "grid four" }, ...form.fields(fields.UNCERTAINTY)),
      ),
      shop.node,
      card(
        "bench-screen",
        say("page.bench.screen"),
        setting("theme", ["auto", "light", "dark"]),
        setting("language", ["auto", ...LANGUAGES]),
        el("p", { class: "help" }, say("page.bench.language_help")),
        setting("decimal", ["language", "point", "comma"]),
        setting("keypad", ["auto", "on", "off"]),
        setting("bases", ["360", "180"]),
        setting("date", ["iso", "day", "day-point", "month"]),
        setting("paper", ["any", "a4", "letter"]),
      ),
      card("bench-start", say("page.bench.start"), started),
      card(
        "bench-data",
        say("page.bench.data"),
        el("p", { class: "help" }, say("page.bench.data_help")),
        el("div", { id: "served" }),
        eraseKey,
        confirm,
      ),
    ),
  };
}

/** @param {ReturnType<typeof import("../editions.js").shopEditions>} editions */
function shopCard(editions) {
  const said = el("div", { class: "said-edition" });
  const list = el("ul", { class: "jobs" });
  const file = el("input", {
    id: "f-edition-file",
    type: "file",
    accept: ".json,application/json",
    onchange: async () => {
      const chosen = file.files?.[0];
      if (chosen) redraw(said, ...(await take(await chosen.text())).map((text) => el("p", {}, text)));
      file.value = "";
    },
  });

  /** @param {string} text @returns {Promise<string[]>} what is to be said of it */
  async function take(text) {
    let edition;
    try {
      edition = readFile(text);
    } catch {
      return [say("page.keep.not_json")];
    }
    const faults = await editions.add(edition);
    return faults.length ? faults.map(faultText) : [say("page.bench.edition_taken")];
  }

  return {
    node: card(
      "bench-editions",
      say("page.bench.editions"),
      el("p", { class: "help" }, say("page.bench.editions_help")),
      el("div", { class: "field" }, el("label", { for: "f-edition-file" }, say("page.labels.edition_file")), file),
      said,
      list,
    ),
    /** @param {{id: string, name: string}[]} own */
    show(own) {
      redraw(
        list,
        ...own.map(({ id, name }) =>
          el(
            "li",
            {},
            el("span", { class: "job-name" }, el("strong", {}, name)),
            button(say("page.bench.edition_drop"), () => editions.remove(id), {
              "aria-label": say("page.bench.edition_drop_named", { name }),
            }),
          ),
        ),
      );
    },
  };
}
