/** This bench: its lens meter, how well it reads, and how this tablet shows things. */

import { button, el } from "../dom.js";
import { choiceControl } from "../controls.js";
import * as fields from "../fields.js";
import { say } from "../words.js";

/**
 * @param {object} tools
 * @param {import("../form.js").Form} tools.form
 * @param {import("../settings.js").Settings} tools.settings
 * @param {() => void} tools.settingsChanged
 * @param {() => void} tools.erase
 */
export function benchView({ form, settings, settingsChanged, erase }) {
  /** @param {"theme"|"decimal"|"keypad"|"bases"} name @param {string[]} values */
  const setting = (name, values) => {
    const control = choiceControl({ path: `setting.${name}`, kind: "choice", label: `setting_${name}`, words: `setting_${name}`, values }, (value) => {
      Object.assign(settings, { [name]: value });
      settingsChanged();
    });
    control.show(settings[name]);
    return control.node;
  };
  const confirm = el("div", { class: "confirm", hidden: true }, el("p", {}, say("page.bench.erase_sure")), button(say("page.bench.erase_yes"), erase, { class: "danger", id: "erase-yes" }));
  const eraseKey = button(say("page.bench.erase"), () => {
    confirm.hidden = !confirm.hidden;
    eraseKey.setAttribute("aria-expanded", String(!confirm.hidden));
  }, { "aria-expanded": "false", id: "erase" });
  return {
    node: el(
      "div",
      { class: "view bench" },
      el("section", { class: "card", "aria-labelledby": "bench-meter" }, el("h2", { id: "bench-meter" }, say("page.bench.meter")), el("p", { class: "help" }, say("page.bench.meter_help")), ...form.fields(fields.INSTRUMENT), el("div", { class: "grid four" }, ...form.fields(fields.INSTRUMENT_NUMBERS))),
      el("section", { class: "card", "aria-labelledby": "bench-uncertainty" }, el("h2", { id: "bench-uncertainty" }, say("page.bench.uncertainty")), el("p", { class: "help" }, say("page.bench.uncertainty_help")), el("div", { class: "grid four" }, ...form.fields(fields.UNCERTAINTY))),
      el("section", { class: "card", "aria-labelledby": "bench-screen" }, el("h2", { id: "bench-screen" }, say("page.bench.screen")), setting("theme", ["auto", "light", "dark"]), setting("decimal", ["point", "comma"]), setting("keypad", ["auto", "on", "off"]), setting("bases", ["360", "180"])),
      el("section", { class: "card", "aria-labelledby": "bench-data" }, el("h2", { id: "bench-data" }, say("page.bench.data")), el("p", { class: "help" }, say("page.bench.data_help")), eraseKey, confirm),
    ),
  };
}
