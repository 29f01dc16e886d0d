/** The fields of the lens as a body, its frame, its wear and its making, for the panels that need them. */

/** @typedef {import("../fields.js").FieldSpec} FieldSpec */

/** @param {string} path @returns {FieldSpec} */
function number(path) {
  return { path, kind: "number", label: `page.panels.labels.${path.split(".").at(-1)}` };
}

/** @param {string} path @returns {FieldSpec} */
function flag(path) {
  return { ...number(path), kind: "flag" };
}

/** @param {string} path @param {string} words @param {string[]} values @returns {FieldSpec} */
function choice(path, words, values) {
  return { path, kind: "choice", label: `page.panels.labels.${words}`, words, values };
}

export const RIM = [
  choice("frame.shape", "rim_shape", ["", "round", "oval", "rounded-rectangle", "teardrop"]),
  flag("frame.drilled"),
];
export const OUTLINE = "frame.outline_mm";
export const SHIFT = [number("centration_shift_mm")];
export const LIMIT = [number("field_limit")];

/** @param {string} eye */
export function segment(eye) {
  const place = `${eye}.segment`;
  return [
    choice(`${place}.shape`, "segment_shape", ["", "round", "flat-top", "full-width"]),
    ...["width_mm", "height_mm", "inset_mm", "centre_below_top_mm"].map((name) => number(`${place}.${name}`)),
  ];
}

export const READING = ["reading_distance_mm", "reading_depth_mm", "reading_inset_mm", "rotation_centre_mm"].map((name) =>
  number(`wear.${name}`),
);
export const WORN = ["pantoscopic_deg", "wrap_deg", "vertex_tested_mm", "vertex_worn_mm"].map((name) => number(`wear.${name}`));

const BODY = [
  "index",
  "abbe",
  "front_curve",
  "curve_index",
  "centre_thickness_mm",
  "minimum_centre_mm",
  "minimum_edge_mm",
  "density_g_cm3",
  "blank_diameter_mm",
];

/** @param {string} place "lens" for both, or an eye whose own fields overrule those */
export function body(place) {
  return [...BODY.map((name) => number(`${place}.${name}`)), flag(`${place}.aspheric`)];
}

/** @param {string} eye an eye whose design is not that of the pair */
export function design(eye) {
  return choice(`${eye}.design`, "own_design", ["", "single-vision", "bifocal", "trifocal", "progressive", "near"]);
}

/** @param {string} eye */
export function surfacing(eye) {
  return ["block_diameter_mm", "ring_index", "prp_right_mm", "prp_up_mm"].map((name) => number(`${eye}.surfacing.${name}`));
}

/** @param {string} eye @param {number} row */
export function point(eye, row) {
  return ["right_mm", "up_mm"].map((name) => number(`points.${eye}[${row}].${name}`));
}
