/** The fields of the job document as data: where each stands, what it is called, how it is entered. */

/**
 * @typedef {object} FieldSpec
 * @property {string} path
 * @property {"power"|"number"|"text"|"choice"|"select"|"flag"} kind
 * @property {string} label the word under `page.labels`
 * @property {string[]} [values] of a choice; "" is "not said"
 * @property {string} [words] the group under `page.values`
 * @property {string} [empty] the value that shows where nothing was chosen
 */

/** @param {string} path @param {FieldSpec["kind"]} kind @param {Partial<FieldSpec>} [more] @returns {FieldSpec} */
function field(path, kind, more = {}) {
  return { path, kind, label: path.split(".").at(-1) ?? path, ...more };
}

/** @param {string} path @param {string[]} values @param {Partial<FieldSpec>} [more] */
function choice(path, values, more = {}) {
  return field(path, "choice", { values, words: path.split(".").at(-1) ?? path, ...more });
}

export const JOB = [
  field("id", "text"),
  choice("state", ["uncut", "edged", "mounted"]),
  choice("lens.design", ["single-vision", "bifocal", "trifocal", "progressive", "near"]),
];

export const THINNING = [
  choice("thinning.rule", ["", "none", "two-thirds", "six-tenths", "amount"], { label: "thinning_rule" }),
];

export const THINNING_AMOUNT = [
  field("thinning.amount", "number", { label: "thinning_amount" }),
  choice("thinning.base", ["down", "up"], { label: "base", words: "base" }),
  field("thinning.left_amount", "number", { label: "thinning_left_amount" }),
];

export const FRAME = [
  field("frame.a_mm", "number"),
  field("frame.b_mm", "number"),
  field("frame.dbl_mm", "number"),
  field("frame.ed_mm", "number"),
  field("pd_mm", "number", { label: "pair_pd_mm" }),
];

export const RULE = choice("decision_rule", ["simple", "guarded"], { empty: "simple" });

/** @param {string} place of the object that holds them @returns {FieldSpec[]} */
export function powers(place) {
  return [
    field(`${place}.sphere`, "power"),
    field(`${place}.cylinder`, "power"),
    field(`${place}.axis`, "number"),
    field(`${place}.add`, "number"),
  ];
}

/** @param {string} eye */
export function positions(eye) {
  return [
    field(`${eye}.pd_mm`, "number"),
    field(`${eye}.prp_height_mm`, "number"),
    field(`${eye}.fitting_height_mm`, "number"),
    field(`${eye}.cross_above_prp_mm`, "number"),
  ];
}

/** @param {string} eye */
export function nearPd(eye) {
  return [field(`${eye}.near_pd_mm`, "number"), choice(`${eye}.pd_for`, ["", "distance", "near"])];
}

/** @param {string} eye */
export function partner(eye) {
  return field(`${eye}.partner`, "flag");
}

/** @param {string} eye */
export function statedThinning(eye) {
  return field(`${eye}.stated.includes_thinning`, "flag");
}

export const READ_AT = choice("readings.at", ["", "marked-point", "first-lens-set"], { label: "read_at" });

export const SLID_DISTANCE = field("readings.prp_distance_mm", "number");

/** @param {string} eye */
export function slid(eye) {
  return [
    field(`readings.${eye}.prp_height_mm`, "number", { label: "slid_height_mm" }),
    field(`readings.${eye}.pd_mm`, "number", { label: "slid_pd_mm" }),
    field(`readings.${eye}.slid_mm`, "number"),
  ];
}

/** @param {string} eye */
export function addSide(eye) {
  return choice(`readings.${eye}.add_side`, ["", "front", "back"]);
}

export const INSTRUMENT = [
  choice("instrument.kind", ["manual", "automatic"], { empty: "manual" }),
  choice("instrument.compensator", ["", "lens-prism", "own-base", "none"]),
  choice("instrument.target", ["cross", "dots"], { empty: "cross" }),
];

export const INSTRUMENT_NUMBERS = [
  field("instrument.rings", "number"),
  field("instrument.ring_step", "number"),
  field("instrument.prism_step", "number"),
  field("instrument.compensator_maximum", "number"),
];

/** What the check with a known prism settles, for those who know it otherwise. */
export const INSTRUMENT_TARGET = [
  choice("instrument.target_direction", ["towards-base", "away-from-base"], { empty: "towards-base" }),
  field("instrument.mirrored", "flag"),
];

export const CHECK_COMPENSATOR = choice("page-check.compensator", ["", "none"], { label: "check_compensator", words: "check_compensator" });

export const INSTRUMENT_ZERO = [
  field("instrument.zero.x", "number", { label: "zero_x" }),
  field("instrument.zero.y", "number", { label: "zero_y" }),
];

export const UNCERTAINTY = [
  field("instrument.uncertainty.prism", "number", { label: "u_prism" }),
  field("instrument.uncertainty.power_d", "number", { label: "u_power_d" }),
  field("instrument.uncertainty.axis_deg", "number", { label: "u_axis_deg" }),
  field("instrument.uncertainty.position_mm", "number", { label: "u_position_mm" }),
  field("instrument.zero_uncertainty", "number", { label: "u_zero" }),
];
