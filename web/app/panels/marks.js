/** What a picture in millimetres is drawn with. Every role that marks a place has a shape of its own, not only a colour. */

import { say, shown } from "../words.js";

/**
 * @typedef {import("../types.js").Scene} Scene
 * @typedef {import("../types.js").Shape} Shape
 * @typedef {{tag: string, attributes: Record<string, string|number>, text?: string}} Mark
 */

/** @typedef {[string, Record<string, number>|[number, number][], string?]} Stroke in pixels round the place, y down */

/** @type {Record<string, Stroke[]>} */
const GLYPHS = {
  prp: [
    ["circle", { r: 9 }],
    ["circle", { r: 1.6 }, "solid"],
  ],
  oc: [["circle", { r: 5 }, "solid"]],
  pupil: [["circle", { r: 5 }]],
  "boxing-centre": [
    ["line", { x1: -5, y1: -5, x2: 5, y2: 5 }],
    ["line", { x1: -5, y1: 5, x2: 5, y2: -5 }],
  ],
  cross: [
    ["line", { x1: -11, y1: 0, x2: 11, y2: 0 }],
    ["line", { x1: 0, y1: -11, x2: 0, y2: 11 }],
  ],
  asked: [["polygon", [[0, -7], [7, 0], [0, 7], [-7, 0]], "solid"]],
  "reading-point": [["polygon", [[0, -7], [7, 6], [-7, 6]]]],
  "old-dot": [["circle", { r: 5 }]],
  "new-dot": [["circle", { r: 5 }, "solid"]],
  thickest: [["rect", { x: -5, y: -5, width: 10, height: 10 }, "solid"]],
  thinnest: [["rect", { x: -5, y: -5, width: 10, height: 10 }]],
};
const PLAIN = /** @type {Stroke[]} */ ([["circle", { r: 4 }, "solid"]]);
const LARGEST_PIXEL = 0.22;
/** Labels that stand beside the place they name, not on it. */
const BESIDE = new Set(["asked", "reading-point"]);
const FILLED = new Set(["zone", "region"]);

/** @param {[number, number][]} points in mm, y up */
function pointsOf(points) {
  return points.map(([x, y]) => `${x},${-y}`).join(" ");
}

/**
 * The glyph of a place, its size given in pixels.
 *
 * @param {string} role
 * @param {number} x
 * @param {number} y down
 * @param {number} pixel in the picture's unit
 * @returns {Mark[]}
 */
export function glyphOf(role, x, y, pixel) {
  // Where a millimetre is a few pixels, as on a phone, neighbours would cover one another.
  const part = Math.min(pixel, LARGEST_PIXEL);
  return (GLYPHS[role] ?? PLAIN).map(([tag, sizes, solid]) => {
    const look = { class: `role-${role} glyph${solid ? " solid" : ""}` };
    if (Array.isArray(sizes)) {
      const points = sizes.map(([right, down]) => `${x + right * part},${y + down * part}`).join(" ");
      return { tag, attributes: { ...look, points } };
    }
    const placed = Object.entries(sizes).map(([name, size]) => {
      const from = name.startsWith("x") ? x : name.startsWith("y") ? y : 0;
      return [name, from + size * part];
    });
    const centre = tag === "circle" ? { cx: x, cy: y } : {};
    return { tag, attributes: { ...look, ...centre, ...Object.fromEntries(placed) } };
  });
}

/**
 * A line with a head; too short for one, it is a dot.
 *
 * @param {Shape} shape
 * @param {Record<string, string|number>} look
 * @param {number} pixel
 * @returns {Mark[]}
 */
function arrow(shape, look, pixel) {
  const { x, y, x2, y2 } = /** @type {any} */ (shape);
  const length = Math.hypot(x2 - x, y2 - y);
  if (length < 2 * pixel) return [{ tag: "circle", attributes: { ...look, cx: x, cy: -y, r: 1.2 * pixel } }];
  const head = Math.min(7 * pixel, length * 0.6);
  const [along, across] = [(x2 - x) / length, (y2 - y) / length];
  const [baseX, baseY] = [x2 - along * head, y2 - across * head];
  const half = head * 0.45;
  const corners = /** @type {[number, number][]} */ ([
    [x2, y2],
    [baseX - across * half, baseY + along * half],
    [baseX + across * half, baseY - along * half],
  ]);
  return [
    { tag: "line", attributes: { ...look, x1: x, y1: -y, x2: baseX, y2: -baseY } },
    { tag: "polygon", attributes: { ...look, class: `${look["class"]} head`, points: pointsOf(corners) } },
  ];
}

/**
 * @param {Shape} shape
 * @param {Record<string, string|number>} look
 * @param {number} pixel
 * @param {{x: number, y: number}} middle of the picture: labels beside a place stay inside it, those of lines outside
 * @returns {Mark}
 */
function label(shape, look, pixel, middle) {
  const text = shape["word"] ? say(shape["word"]) : shown(shape["text"]);
  const [x, y] = [shape["x"], -shape["y"]];
  if (shape.role === "eye-label") return { tag: "text", attributes: { ...look, x, y: y - 11 * pixel }, text };
  if (shape.role === "iso-line") {
    const outwards = { x: x + Math.sign(x - middle.x) * 4 * pixel, y: y + Math.sign(y - middle.y) * 10 * pixel };
    return { tag: "text", attributes: { ...look, ...outwards }, text };
  }
  if (!BESIDE.has(shape.role)) return { tag: "text", attributes: { ...look, x, y }, text };
  const side = x > middle.x ? -1 : 1;
  const place = { x: x + side * 11 * pixel, y: y - 9 * pixel };
  return { tag: "text", attributes: { ...look, class: `${look["class"]} ${side > 0 ? "after" : "before"}`, ...place }, text };
}

/** @param {Shape} shape @param {Record<string, string|number>} look @param {number} pixel @returns {Mark[]} a line a comma */
function viewLabel(shape, look, pixel) {
  const lines = shown(shape["text"]).split(/(?<=,) /);
  return lines.map((text, index) => ({ tag: "text", attributes: { ...look, x: shape["x"], y: -shape["y"] + 15 * index * pixel }, text }));
}

/**
 * The marks of one shape.
 *
 * @param {Shape} shape
 * @param {number} pixel how much of the picture's unit one pixel of the screen is
 * @param {{middle: {x: number, y: number}, hatch: string}} picture
 * @returns {Mark[]}
 */
export function marksOf(shape, pixel, { middle, hatch }) {
  const look = { class: `role-${shape.role}${shape["dashed"] ? " dashed" : ""}` };
  const { x, y, x2, y2 } = /** @type {any} */ (shape);
  switch (shape.kind) {
    case "circle":
      return [{ tag: "circle", attributes: { ...look, cx: x, cy: -y, r: shape["radius"] } }];
    case "line":
      return [{ tag: "line", attributes: { ...look, x1: x, y1: -y, x2, y2: -y2 } }];
    case "rect": {
      const place = { x: Math.min(x, x2), y: Math.min(-y, -y2), width: Math.abs(x2 - x), height: Math.abs(y2 - y) };
      return [{ tag: "rect", attributes: { ...look, ...place } }];
    }
    case "polygon":
    case "polyline": {
      const mark = { tag: shape.kind, attributes: { ...look, points: pointsOf(shape["points"]) } };
      if (!FILLED.has(shape.role)) return [mark];
      const lines = { ...mark.attributes, class: "region-hatch", fill: `url(#${hatch})` };
      return [{ tag: shape.kind, attributes: lines }, mark];
    }
    case "arrow":
      return arrow(shape, look, pixel);
    case "point":
      return glyphOf(shape.role, x, -y, pixel);
    case "label":
      return shape.role === "view-label" ? viewLabel(shape, look, pixel) : [label(shape, look, pixel, middle)];
    default:
      return [];
  }
}
