/** The symbol of an outcome: where the dot stands to the brackets. Its meaning never rests on colour. */

import { svg } from "./dom.js";

/** @type {Record<string, () => SVGElement[]>} */
const INSIDE = {
  within: () => [dot(24, 24)],
  outside: () => [svg("path", { d: "M17 17 L31 31 M31 17 L17 31" })],
  undecided: () => [svg("path", { d: "M18 20 a6 6 0 1 1 8 5.6 q-2 0.8 -2 3.4" }), dot(24, 34.5, 2.2)],
  unread: () => [svg("path", { d: "M17 24 L31 24", class: "faint" })],
};

/** @param {number} x @param {number} y @param {number} [radius] */
function dot(x, y, radius = 5) {
  return svg("circle", { cx: x, cy: y, r: radius, class: "solid" });
}

/** @param {string} outcome */
export function outcomeSymbol(outcome) {
  const inside = INSIDE[outcome] ?? INSIDE["unread"];
  return svg(
    "svg",
    { class: `outcome-symbol ${outcome}`, viewBox: "0 0 48 48", "aria-hidden": "true", focusable: "false" },
    svg("path", { d: "M14 8 L7 8 L7 40 L14 40 M34 8 L41 8 L41 40 L34 40" }),
    ...(inside ? inside() : []),
  );
}
