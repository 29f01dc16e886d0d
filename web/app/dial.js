/** A scene of the core as SVG. The core's y goes up, the screen's down; nothing else is changed. */

import { differs, svg } from "./dom.js";
import { say, shown } from "./words.js";

/**
 * @typedef {import("./types.js").Scene} Scene
 * @typedef {import("./types.js").Shape} Shape
 * @typedef {{tag: string, attributes: Record<string, string|number>, text?: string}} Mark
 */

const hasScale = (/** @type {Scene} */ { shapes }) => shapes.some(({ role }) => role === "base-label");

/** The room on each side that the words of a base scale have in any case, as a part of the scene's width. */
const ROOM = 0.075;
/** In hundredths of the scene's width: what is free outside the rings, and what a word takes beside its ring. */
const FREE = 9;
const WORD = { from: 5.1, letter: 3.7, smallLetter: 3.4 };
const SHORT_WORD = 3;

/** @param {string} word a longer one is written smaller */
const isLong = (word) => word.length > SHORT_WORD;

/** @param {Scene} scene the base scale's words need room on both sides, in some languages more */
export function viewBox(scene) {
  const [left, bottom, right, top] = scene.extent;
  const width = right - left;
  const words = scene.shapes.filter((shape) => shape.role === "base-label" && shape["word"] && shape["x"]).map(labelOf);
  const needs = words.map((word) => WORD.from + word.length * (isLong(word) ? WORD.smallLetter : WORD.letter) - FREE);
  const room = hasScale(scene) ? width * Math.max(ROOM, ...needs.map((need) => need / 100)) : 0;
  return [left - room, -top, width + 2 * room, top - bottom];
}

/**
 * The marks of one shape. `unit` is a hundredth of the picture's width, for what has no size of its own.
 *
 * @param {Shape} shape
 * @param {number} unit
 * @param {string} hatch id of the pattern that fills the acceptance region
 * @param {number} [targetSize] in the large eyepiece
 * @returns {Mark[]}
 */
export function marksOf(shape, unit, hatch, targetSize = 1) {
  const attributes = { class: `role-${shape.role}${shape["dashed"] ? " dashed" : ""}` };
  const { x, y } = shape;
  switch (shape.kind) {
    case "circle":
      return filled({ tag: "circle", attributes: { ...attributes, cx: x, cy: -y, r: shape["radius"] } }, shape, hatch);
    case "line":
      return [{ tag: "line", attributes: { ...attributes, x1: x, y1: -y, x2: shape["x2"], y2: -shape["y2"] } }];
    case "rect":
      return filled(rectangle(shape, attributes), shape, hatch);
    case "point":
      if (shape.role === "expected") return ringed(attributes, x, y, unit);
      return [shape.role === "mean" ? diamond(attributes, x, y, 2.2 * unit) : dot(attributes, x, y, 1.6 * unit)];
    case "crosses":
      return target(shape, attributes, unit * targetSize);
    case "label":
      return shape.role === "base-label"
        ? baseLabel(shape, attributes, unit)
        : [{ tag: "text", attributes: { ...attributes, x, y: -y + 3 * unit }, text: labelOf(shape) }];
    default:
      return [];
  }
}

/**
 * The scale's figure outside the rings, and under it the word for that side.
 *
 * @param {Shape} shape
 * @param {Record<string, string|number>} attributes
 * @param {number} unit
 * @returns {Mark[]}
 */
function baseLabel(shape, attributes, unit) {
  const { x, y } = shape;
  const side = x > 0 ? "to-right" : x < 0 ? "to-left" : "middle";
  const place = { x: x + Math.sign(x) * 4.4 * unit, y: -y - Math.sign(y) * 5.6 * unit };
  const look = (/** @type {string} */ more) => ({ ...attributes, class: `${attributes["class"]} ${side}${more}` });
  if (!shape["word"]) return [{ tag: "text", attributes: { ...look(""), ...place }, text: shown(shape["text"]) }];
  return [
    { tag: "text", attributes: { ...look(""), x: place.x, y: place.y - 2.8 * unit }, text: shown(shape["text"]) },
    { tag: "text", attributes: { ...look(` base-word${isLong(labelOf(shape)) ? " long" : ""}`), x: place.x, y: place.y + 2.8 * unit }, text: labelOf(shape) },
  ];
}

/** @param {Shape} shape */
function labelOf(shape) {
  return shape["word"] ? say(shape["word"]) : shown(shape["text"]);
}

/** @param {Record<string, string|number>} attributes @param {number} x @param {number} y @param {number} radius @returns {Mark} */
function dot(attributes, x, y, radius) {
  return { tag: "circle", attributes: { ...attributes, cx: x, cy: -y, r: radius } };
}

/** @param {Record<string, string|number>} attributes @param {number} x @param {number} y @param {number} half @returns {Mark} */
function diamond(attributes, x, y, half) {
  return { tag: "path", attributes: { ...attributes, d: `M${x} ${-y - half} l${half} ${half} l${-half} ${half} l${-half} ${-half} Z` } };
}

/** @param {Record<string, string|number>} attributes @param {number} x @param {number} y @param {number} unit a ring with a dot */
function ringed(attributes, x, y, unit) {
  return [
    dot({ class: `${attributes["class"]} ring-mark` }, x, y, 3.6 * unit),
    dot({ class: `${attributes["class"]} dot-mark` }, x, y, 1 * unit),
  ];
}

/** @param {Shape} shape @param {Record<string, string|number>} attributes @returns {Mark} */
function rectangle(shape, attributes) {
  const { x, y, x2, y2 } = /** @type {any} */ (shape);
  const place = { x: Math.min(x, x2), y: Math.min(-y, -y2), width: Math.abs(x2 - x), height: Math.abs(y2 - y) };
  return { tag: "rect", attributes: { ...attributes, ...place } };
}

/** @param {Mark} mark @param {Shape} shape @param {string} hatch @returns {Mark[]} a region is hatched as well as outlined */
function filled(mark, shape, hatch) {
  if (shape.role !== "region" || shape["empty"]) return [mark];
  const under = { ...mark.attributes, class: "region-ground" };
  const lines = { ...mark.attributes, class: "region-hatch", fill: `url(#${hatch})` };
  return [{ tag: mark.tag, attributes: under }, { tag: mark.tag, attributes: lines }, mark];
}

/**
 * The target as it is seen: crossed lines with an open middle, turned with the axis.
 *
 * @param {Shape} shape
 * @param {Record<string, string|number>} attributes
 * @param {number} unit
 * @returns {Mark[]}
 */
function target(shape, attributes, unit) {
  const { x, y } = shape;
  const turn = `translate(${x} ${-y}) rotate(${-(shape["angle_deg"] ?? 0)})`;
  const [near, far] = [1.3 * unit, 4.8 * unit];
  const arms = [
    [1, 0],
    [-1, 0],
    [0, 1],
    [0, -1],
  ];
  const ground = { tag: "circle", attributes: { class: "target-ground", cx: x, cy: -y, r: 0.6 * unit } };
  if (shape["style"] === "dots") {
    return Array.from({ length: 12 }, (_, index) => ({
      tag: "circle",
      attributes: {
        ...attributes,
        class: `${attributes["class"]} dots`,
        transform: `translate(${x} ${-y}) rotate(${index * 30})`,
        cx: 4 * unit,
        cy: 0,
        r: 0.7 * unit,
      },
    }));
  }
  return [
    ground,
    ...arms.map(([right, down]) => ({
      tag: "line",
      attributes: {
        ...attributes,
        transform: turn,
        x1: (right ?? 0) * near,
        y1: (down ?? 0) * near,
        x2: (right ?? 0) * far,
        y2: (down ?? 0) * far,
      },
    })),
  ];
}

/** @param {string} id @param {number} unit the slanted lines that fill the acceptance region */
function hatching(id, unit) {
  const step = 2.6 * unit;
  return svg(
    "pattern",
    { id, width: step, height: step, patternUnits: "userSpaceOnUse", patternTransform: "rotate(45)" },
    svg("line", { class: "hatch-line", x1: 0, y1: 0, x2: 0, y2: step }),
  );
}

const STILL = new Set(["ring", "ring-label", "tick", "base-label", "grid"]);

/**
 * Draws one layer, unless it shows this already: a keystroke moves the reading, not the rings.
 *
 * @param {SVGElement} layer
 * @param {Shape[]} shapes
 * @param {number} unit
 * @param {string} hatch
 * @param {number} targetSize
 */
function drawLayer(layer, shapes, unit, hatch, targetSize) {
  if (!differs(layer, [unit, say("directions.in"), shown("0.5"), shapes])) return;
  layer.setAttribute("font-size", String(5 * unit));
  const marks = shapes.flatMap((shape) => marksOf(shape, unit, hatch, targetSize));
  layer.replaceChildren(...marks.map(({ tag, attributes, text }) => svg(tag, attributes, text ?? null)));
}

/**
 * Draws a scene into an svg element.
 *
 * @param {SVGElement} host
 * @param {Scene} scene
 * @param {string} id unique on the page
 * @param {{marks: number, target: number}} [look] how large what has no size of its own is drawn
 */
export function drawScene(host, scene, id, look = { marks: 1, target: 1 }) {
  const box = viewBox(scene);
  const width = (scene.extent[2] - scene.extent[0]) * (hasScale(scene) ? 1 + 2 * ROOM : 1);
  const unit = (look.marks * width) / 100;
  const hatch = `hatch-${id}`;
  const place = box.join(" ");
  if (host.getAttribute("viewBox") !== place) {
    host.setAttribute("viewBox", place);
    host.replaceChildren(svg("defs", {}, hatching(hatch, unit)), svg("g", { class: "still" }), svg("g", { class: "content" }));
  }
  const [still, content] = /** @type {Iterable<SVGElement>} */ (host.querySelectorAll(":scope > g"));
  const isStill = (/** @type {Shape} */ { role }) => STILL.has(role);
  if (still) drawLayer(still, scene.shapes.filter(isStill), unit, hatch, look.target);
  if (content) drawLayer(content, scene.shapes.filter((shape) => !isStill(shape)), unit, hatch, look.target);
}

/**
 * Where a touch lies in the scene, as text.
 *
 * @param {SVGSVGElement} picture
 * @param {{clientX: number, clientY: number}} event
 * @param {number} [places] decimals
 */
export function placeOf(picture, event, places = 4) {
  const matrix = picture.getScreenCTM();
  if (!matrix) return null;
  const point = new DOMPoint(event.clientX, event.clientY).matrixTransform(matrix.inverse());
  return { x: point.x.toFixed(places), y: (-point.y).toFixed(places) };
}

/**
 * The small picture of a role, shown beside its word.
 *
 * @param {"ordered"|"thinning"|"expected"|"read"|"compensator"} role
 */
export function legendMark(role) {
  const marks = {
    ordered: [
      svg("line", { class: "role-ordered", x1: 2, y1: 12, x2: 18, y2: 12 }),
      svg("circle", { class: "role-ordered dot-mark", cx: 19, cy: 12, r: 3 }),
    ],
    thinning: [svg("line", { class: "role-thinning", x1: 2, y1: 12, x2: 22, y2: 12 })],
    expected: [
      svg("circle", { class: "role-expected ring-mark", cx: 12, cy: 12, r: 7 }),
      svg("circle", { class: "role-expected dot-mark", cx: 12, cy: 12, r: 2 }),
    ],
    read: [
      [12, 2, 12, 9],
      [12, 15, 12, 22],
      [2, 12, 9, 12],
      [15, 12, 22, 12],
    ].map(([x1, y1, x2, y2]) => svg("line", { class: "role-target", x1, y1, x2, y2 })),
    compensator: [svg("line", { class: "role-compensator", x1: 2, y1: 12, x2: 22, y2: 12 })],
  };
  return svg("svg", { class: "legend", viewBox: "0 0 24 24", "aria-hidden": "true", focusable: "false" }, ...marks[role]);
}
