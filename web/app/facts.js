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

/** @param {CompensatorSetting} setting the scale's setting, what the target then does, and whether the scale reaches it */
function settingTexts({ shown: scale, residual, beyond_maximum: beyond }) {
  const stands = residual.quadrant === "none" ? say("page.facts.centres") : say("page.facts.leaves", { prism: text(residual) });
  return [scale["text"] ?? "", scale["text_180"] ?? "", stands, beyond ? say("page.facts.beyond_maximum") : ""];
}

/** @param {import("./types.js").Prism|null|undefined} prism @returns {string} its text, "none" where there is no prism */
function textOrNone(prism) {
  if (!prism) return say("page.facts.not_known");
  return prism.quadrant === "none" ? say("page.facts.none") : text(prism);
}

/** @param {LensReport} lens @returns {Fact} what the lens meter must show, or the part of it that is known */
function mustShow(lens) {
  const { expected } = lens;
  if (!expected) return fact("expected", [say("page.facts.not_known")], "expected");
  if (lens.expected_known !== "horizontal") return fact("expected", [text(expected)], "expected");
  const { base } = expected.horizontal;
  const across = say("page.facts.horizontal_only", {
    horizontal: expected.shown["horizontal"],
    base: base ? say(`page.bases.${base}`) : "",
  });
  return fact("expected", [across, say("page.facts.vertical_unknown")], "expected");
}

/** @param {LensReport} lens */
function reads(lens) {
  const { spread } = lens;
  const repeated = spread ? say(`page.facts.spread_${spread.from}`, { count: spread.count, ...spread.shown }) : "";
  return fact("read", [lens.read ? text(lens.read) : say("page.facts.not_read"), repeated], "read");
}

/** @param {LensReport} lens @returns {Fact[]} what an automatic lens meter shows, as it shows it */
function meterFacts({ meter }) {
  if (!meter) return [];
  return [fact("meter", [[say(`page.meter.key_${meter.key}`), meter.horizontal.shown, meter.vertical.shown].join("  ")])];
}

/** @param {LensReport} lens @returns {Fact[]} the rows that always stand under the dial */
export function mainFacts(lens) {
  const ordered = fact(lens.stated_used ? "stated" : "ordered", [textOrNone(lens.prescribed)], "ordered");
  return [
    ...(lens.partner ? [] : [ordered]),
    fact("thinning", [textOrNone(lens.thinning)], "thinning"),
    mustShow(lens),
    ...meterFacts(lens),
    reads(lens),
    ...(lens.compensator?.needed ? compensatorFacts(lens) : []),
  ];
}

/** @param {LensReport} lens @returns {Fact[]} */
function compensatorFacts(lens) {
  const setting = lens.compensator;
  if (!setting) return [];
  if (setting.sense === "unknown") return [fact("compensator", [say("page.facts.sense_unknown")], "compensator")];
  return [setting.full, setting.onto_rings].flatMap((one) =>
    one ? [fact("compensator", settingTexts(one), "compensator")] : [],
  );
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
    rows.push(
      fact("notation_180", [lens.expected.shown["text_180"] ?? ""]),
      fact("quadrant", [say(`page.quadrants.${lens.expected.quadrant}`)]),
    );
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
