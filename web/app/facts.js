/** What is known of one lens, as rows of a mark, a word and texts. Chooses and names; computes nothing. */

import { say, shown } from "./words.js";

/**
 * @typedef {import("./types.js").LensReport} LensReport
 * @typedef {import("./types.js").CompensatorSetting} CompensatorSetting
 * @typedef {"ordered"|"thinning"|"expected"|"read"|"compensator"} Mark
 * @typedef {{key: string, mark?: Mark, name: string, texts: string[]}} Fact
 */

/** @param {string} key @param {string[]} texts @param {Mark} [mark] @returns {Fact} */
function fact(key, texts, mark) {
  const row = { key, name: say(`page.facts.${key}`), texts: texts.filter(Boolean).map(shown) };
  return mark ? { ...row, mark } : row;
}

/** @param {import("./types.js").Prism|null|undefined} prism */
function text(prism) {
  return prism?.shown["text"] ?? "";
}

/** @param {CompensatorSetting|null|undefined} setting the setting, what it leaves, and whether the scale reaches it */
function settingTexts(setting) {
  if (!setting) return [];
  const leaves = text(setting.residual);
  return [
    setting.shown["text"] ?? "",
    setting.shown["text_180"] ?? "",
    leaves ? say("page.facts.leaves", { prism: leaves }) : "",
    setting.beyond_maximum ? say("page.facts.beyond_maximum") : "",
  ];
}

/** @param {LensReport} lens @returns {Fact} what the lens meter must show, or the part of it that is known */
function mustShow(lens) {
  const known = lens.expected ? text(lens.expected) : "";
  if (!known) return fact("expected", [say("page.facts.not_known")], "expected");
  if (lens.expected_known !== "horizontal") return fact("expected", [known], "expected");
  const across = lens.expected?.shown["horizontal"] ?? "";
  return fact("expected", [say("page.facts.horizontal_only", { horizontal: across }), say("page.facts.vertical_unknown")], "expected");
}

/** @param {LensReport} lens */
function reads(lens) {
  const spread = lens.spread ? say("page.facts.spread", { count: lens.spread.count, spread: lens.spread.shown }) : "";
  return fact("read", [lens.read ? text(lens.read) : say("page.facts.not_read"), spread], "read");
}

/** @param {LensReport} lens @returns {Fact[]} the rows that always stand under the dial */
export function mainFacts(lens) {
  const rows = [];
  if (!lens.partner) rows.push(fact(lens.stated_used ? "stated" : "ordered", [text(lens.prescribed) || say("page.facts.no_prism")], "ordered"));
  rows.push(fact("thinning", [lens.thinning ? text(lens.thinning) || say("page.facts.none") : say("page.facts.not_known")], "thinning"));
  rows.push(mustShow(lens), reads(lens));
  if (lens.meter) {
    rows.push(fact("meter", [say(`page.meter.key_${lens.meter.key}`), lens.meter.horizontal.shown, lens.meter.vertical.shown]));
  }
  if (lens.compensator?.needed) rows.push(...compensatorFacts(lens));
  return rows;
}

/** @param {LensReport} lens @returns {Fact[]} */
function compensatorFacts(lens) {
  const setting = lens.compensator;
  if (!setting) return [];
  if (setting.sense === "unknown") return [fact("compensator", [say("page.facts.sense_unknown")], "compensator")];
  const rows = [];
  if (setting.full) rows.push(fact("compensator_full", settingTexts(setting.full), "compensator"));
  if (setting.onto_rings) rows.push(fact("compensator_rings", settingTexts(setting.onto_rings), "compensator"));
  return rows;
}

/** @param {LensReport} lens @returns {Fact[]} the rows that open on demand */
export function moreFacts(lens) {
  const rows = [];
  const power = lens.power;
  if (power) {
    rows.push(
      fact("power", [power.plus_form.shown["text"] ?? "", power.minus_form.shown["text"] ?? ""]),
      fact("along", [say("page.facts.along_90_180", { at_90: power.shown["at_90"], at_180: power.shown["at_180"] })]),
    );
  }
  if (lens.expected) {
    rows.push(fact("notation_180", [lens.expected.shown["text_180"] ?? ""]), fact("quadrant", [say(`page.quadrants.${lens.expected.quadrant}`)]));
  }
  if (lens.error) rows.push(fact("error", [text(lens.error)]));
  if (lens.compensator && !lens.compensator.needed) rows.push(...compensatorFacts(lens));
  return rows.filter((row) => row.texts.length);
}

/**
 * What the dials say, for those who do not see them.
 *
 * @param {string} eye
 * @param {LensReport} lens
 */
export function dialText(eye, lens) {
  const rows = mainFacts(lens).map(({ name, texts }) => `${name}: ${texts.join(", ")}`);
  return [say("page.dial.label", { eye: say(`page.eyes.${eye}`) }), ...rows].join(". ");
}
