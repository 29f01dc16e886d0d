/** A picture of the core in millimetres as SVG: to scale, both lenses alike, with a bar of 10 mm. */

import { placeOf } from "../dial.js";
import { el, svg } from "../dom.js";
import { has, say } from "../words.js";
import { glyphOf, marksOf } from "./marks.js";

/** @typedef {import("../types.js").Scene} Scene */
/** @typedef {[number, number]} Size across and along, in the scene's unit */

const FONT_PX = 13;
const SMALL_FONT_PX = 11.5;
const NARROW_PX = 360;
const BAR_MM = 10;
const FOOT_PX = 24;
/** Where the sheet is printed nothing is laid out yet. */
const PRINTED_PX = 420;
const WIDE_MM = 100;

/** @param {Scene[]} scenes @returns {Size} the size that holds each of them */
export function commonSize(scenes) {
  const across = scenes.map(({ extent }) => extent[2] - extent[0]);
  const along = scenes.map(({ extent }) => extent[3] - extent[1]);
  return [Math.max(...across), Math.max(...along)];
}

/**
 * @param {Scene} scene
 * @param {Size} size
 * @param {number} pixel
 * @returns {[number, number, number, number]} the view, the scene in its middle, the bar under it
 */
export function viewOf({ extent, unit }, [across, along], pixel) {
  const foot = unit === "mm" ? FOOT_PX * pixel : 0;
  const middle = [(extent[0] + extent[2]) / 2, (extent[1] + extent[3]) / 2];
  return [(middle[0] ?? 0) - across / 2, -(middle[1] ?? 0) - along / 2, across, along + foot];
}

/** @param {[number, number, number, number]} view @param {number} pixel */
function scaleBar([x, y, width, height], pixel) {
  const [length, word] = width > 2 * BAR_MM ? [BAR_MM, "scale"] : [BAR_MM / 10, "scale_small"];
  const low = y + height - 6 * pixel;
  const start = x + 4 * pixel;
  return svg(
    "g",
    { class: "scale-bar" },
    svg("line", { x1: start, y1: low, x2: start + length, y2: low }),
    svg("line", { x1: start, y1: low - 4 * pixel, x2: start, y2: low + 4 * pixel }),
    svg("line", { x1: start + length, y1: low - 4 * pixel, x2: start + length, y2: low + 4 * pixel }),
    svg("text", { class: "after", x: start + length + 6 * pixel, y: low - 3 * pixel }, say(`page.panels.${word}`)),
  );
}

/** @param {string} id @param {number} pixel */
function hatching(id, pixel) {
  const step = 7 * pixel;
  return svg(
    "pattern",
    { id, width: step, height: step, patternUnits: "userSpaceOnUse", patternTransform: "rotate(45)" },
    svg("line", { class: "hatch-line", x1: 0, y1: 0, x2: 0, y2: step }),
  );
}

/**
 * @param {SVGElement} host
 * @param {Scene} scene
 * @param {Size} size
 * @param {number} width in pixels
 */
function draw(host, scene, size, width) {
  const pixel = size[0] / width;
  const view = viewOf(scene, size, pixel);
  const hatch = `${host.id}-hatch`;
  const picture = { middle: { x: view[0] + view[2] / 2, y: view[1] + size[1] / 2 }, hatch };
  host.setAttribute("viewBox", view.join(" "));
  host.replaceChildren(
    svg("defs", {}, hatching(hatch, pixel)),
    svg(
      "g",
      { "font-size": (width < NARROW_PX ? SMALL_FONT_PX : FONT_PX) * pixel },
      ...scene.shapes
        .flatMap((shape) => marksOf(shape, pixel, picture))
        .map(({ tag, attributes, text }) => svg(tag, attributes, text ?? null)),
      scene.unit === "mm" ? scaleBar(view, pixel) : null,
    ),
  );
}

/**
 * One picture, drawn when it has a width and anew when that changes.
 *
 * @param {string} id
 * @param {(place: {x: string, y: string}) => void} [touch] what a touch in it does
 */
export function createPicture(id, touch) {
  const host = /** @type {SVGSVGElement} */ (svg("svg", { class: "scene", role: "img", id }));
  /** @type {{scene: Scene, size: Size}|null} */
  let shown = null;
  let width = 0;
  const paint = () => {
    if (shown && width) draw(host, shown.scene, shown.size, width);
  };
  new ResizeObserver(([entry]) => {
    const now = Math.round(entry?.contentRect.width ?? 0);
    if (now === width) return;
    width = now;
    paint();
  }).observe(host);
  if (touch) {
    host.classList.add("touchable");
    host.addEventListener("click", (event) => {
      const place = placeOf(host, event, 1);
      if (place) touch(place);
    });
  }
  return {
    node: host,
    /** @param {Scene|null} scene @param {Size} size @param {string} name what it is a picture of */
    show(scene, size, name) {
      shown = scene && { scene, size };
      host.setAttribute("aria-label", name);
      if (!shown) return;
      // Before it is laid out it needs a shape, so that it gets a width.
      if (!width) host.setAttribute("viewBox", viewOf(shown.scene, size, 0).join(" "));
      paint();
    },
  };
}

/** @param {Size} size whether a picture needs the width of the sheet to be read */
export function isWide([across]) {
  return across > WIDE_MM;
}

/** @param {string} id @param {Scene} scene @param {Size} size a picture for paper */
export function printedPicture(id, scene, size) {
  const host = svg("svg", { class: "scene", "aria-hidden": "true", id });
  draw(host, scene, size, isWide(size) ? 2 * PRINTED_PX : PRINTED_PX);
  return host;
}

/** @param {string} name of the section @param {"right"|"left"|"pair"} place what stands over a picture */
export function captionOf(name, place) {
  if (place !== "pair") return el("figcaption", {}, say(`page.lenses.${place}`));
  const code = `page.panels.captions.${name}`;
  return has(code) ? el("figcaption", {}, say(code)) : null;
}

/** @param {string} name of the section @param {string} role @returns {string} "" where a role explains itself */
function roleWord(name, role) {
  const code = [`page.panels.roles.${name}.${role}`, `page.panels.roles.${role}`].find(has);
  return code ? say(code) : "";
}

/**
 * What the marks of some pictures mean, each once.
 *
 * @param {string} name of the section
 * @param {Scene[]} scenes
 */
export function legendOf(name, scenes) {
  /** @type {Map<string, import("../types.js").Shape>} */
  const roles = new Map();
  for (const shape of scenes.flatMap(({ shapes }) => shapes)) {
    if (shape.kind !== "label" && !roles.has(shape.role)) roles.set(shape.role, shape);
  }
  const entries = [...roles].flatMap(([role, shape]) => {
    const word = roleWord(name, role);
    return word ? [el("li", {}, sample(name, shape), word)] : [];
  });
  return entries.length ? el("ul", { class: "scene-legend" }, ...entries) : null;
}

/** @param {string} name @param {import("../types.js").Shape} shape */
function sample(name, { role, kind, ...shape }) {
  const hatch = `legend-${name}-${role}`;
  const marks =
    kind === "point"
      ? glyphOf(role, 2.4, 2.4, 0.2)
      : marksOf({ role, kind, ...shape, ...sampleOf(kind) }, 1, { middle: { x: 0, y: 0 }, hatch });
  return svg(
    "svg",
    { class: "legend scene", viewBox: kind === "point" ? "0 0 4.8 4.8" : "0 0 24 24", "aria-hidden": "true", focusable: "false" },
    svg("defs", {}, hatching(hatch, 1)),
    ...marks.map(({ tag, attributes }) => svg(tag, attributes)),
  );
}

/** @param {string} kind @returns {Record<string, any>} a small one of that kind, y up */
function sampleOf(kind) {
  if (kind === "circle") return { x: 12, y: -12, radius: 9 };
  if (kind === "line" || kind === "arrow") return { x: 2, y: -12, x2: 22, y2: -12 };
  if (kind === "rect") return { x: 3, y: -18, x2: 21, y2: -6 };
  if (kind === "polyline") return { points: [[2, -16], [12, -8], [22, -16]] };
  return { points: [[3, -8], [8, -5], [16, -5], [21, -8], [19, -18], [5, -18]] };
}
