/** Four arrow keys that move the target, as the observer sees it; each says the base it leads to. */

import { button, el, svg } from "./dom.js";

/** Where the target goes, seen by the observer. */
const ARROWS = /** @type {const} */ ([
  { key: "up", right: 0, up: 1, path: "M12 4 L20 18 L4 18 Z" },
  { key: "left", right: -1, up: 0, path: "M4 12 L18 4 L18 20 Z" },
  { key: "down", right: 0, up: -1, path: "M12 20 L4 6 L20 6 Z" },
  { key: "right", right: 1, up: 0, path: "M20 12 L6 4 L6 20 Z" },
]);

/**
 * @param {object} pad
 * @param {string} pad.id of the keys, with the side after it
 * @param {(right: number, up: number) => void} pad.act
 * @param {(side: string) => {word: string, label: string}} pad.names what stands on the key of a side, and its full name
 * @param {...(Node|null)} corners what stands beside the upper arrow
 */
export function stepPad({ id, act, names }, ...corners) {
  const keys = ARROWS.map(({ key, right, up, path }) => {
    const word = el("span");
    const node = button(
      "",
      () => act(right, up),
      { class: `step ${key}`, "data-repeats": true, id: `${id}-${key}` },
      svg("svg", { viewBox: "0 0 24 24", "aria-hidden": "true" }, svg("path", { d: path })),
      word,
    );
    return { key, node, word };
  });

  /** Names the keys anew, where what they lead to has changed. */
  function draw() {
    for (const { key, node, word } of keys) {
      const { word: text, label } = names(key);
      if (word.textContent !== text) word.textContent = text;
      if (node.getAttribute("aria-label") !== label) node.setAttribute("aria-label", label);
    }
  }

  draw();
  return { node: el("div", { class: "step-keys" }, ...corners, ...keys.map(({ node }) => node)), draw };
}
