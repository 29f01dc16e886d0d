/** Builds nodes. There are no HTML strings and no style attributes anywhere in the page. */

const SVG = "http://www.w3.org/2000/svg";

/**
 * @typedef {Record<string, string|number|boolean|null|undefined|((event: any) => void)>} Attributes
 * @typedef {Node|string|null|undefined|false} Child
 */

/**
 * @param {Element} node
 * @param {Attributes} attributes names beginning with "on" are listeners
 */
function dress(node, attributes) {
  for (const [name, value] of Object.entries(attributes)) {
    if (typeof value === "function") node.addEventListener(name.slice(2), value);
    else if (value === true) node.setAttribute(name, "");
    else if (value !== false && value !== null && value !== undefined) {
      node.setAttribute(name, String(value));
    }
  }
}

/** @param {Element} node @param {Child[]} children */
function fill(node, children) {
  for (const child of children) {
    if (child || child === "") node.append(child);
  }
}

/**
 * @template {keyof HTMLElementTagNameMap} Tag
 * @param {Tag} tag
 * @param {Attributes} [attributes]
 * @param {...Child} children
 * @returns {HTMLElementTagNameMap[Tag]}
 */
export function el(tag, attributes = {}, ...children) {
  const node = document.createElement(tag);
  dress(node, attributes);
  fill(node, children);
  return node;
}

/**
 * @param {string} tag
 * @param {Attributes} [attributes]
 * @param {...Child} children
 * @returns {SVGElement}
 */
export function svg(tag, attributes = {}, ...children) {
  const node = /** @type {SVGElement} */ (document.createElementNS(SVG, tag));
  dress(node, attributes);
  fill(node, children);
  return node;
}

/**
 * A button that ignores a second touch within 300 ms, as gloves give it.
 *
 * @param {string} label
 * @param {(event: MouseEvent) => void} act
 * @param {Attributes} [attributes]
 * @param {...Child} children what stands in it instead of the label
 */
export function button(label, act, attributes = {}, ...children) {
  let last = -Infinity;
  return el(
    "button",
    {
      type: "button",
      ...attributes,
      onclick: (/** @type {MouseEvent} */ event) => {
        if (event.timeStamp - last < 300 && !attributes["data-repeats"]) return;
        last = event.timeStamp;
        act(event);
      },
    },
    ...(children.length ? children : [label]),
  );
}

/**
 * A card with its heading, which names it.
 *
 * @param {string} id of the heading
 * @param {string} title
 * @param {...Child} children
 */
export function card(id, title, ...children) {
  return el("section", { class: "card", "aria-labelledby": id }, el("h2", { id }, title), ...children);
}

/**
 * Puts new children into a host and keeps what the person had: the focus and the opened details,
 * found again by their `data-key`.
 *
 * @param {Element} host
 * @param {...Child} children
 */
export function redraw(host, ...children) {
  const active = document.activeElement;
  const key = active && host.contains(active) ? active.getAttribute("data-key") : null;
  const open = new Map(
    [...host.querySelectorAll("details[data-key]")].map((node) => [
      node.getAttribute("data-key"),
      /** @type {HTMLDetailsElement} */ (node).open,
    ]),
  );
  const kept = document.createDocumentFragment();
  for (const child of children) if (child) kept.append(child);
  host.replaceChildren(kept);
  for (const node of host.querySelectorAll("details[data-key]")) {
    const was = open.get(node.getAttribute("data-key"));
    if (was !== undefined) /** @type {HTMLDetailsElement} */ (node).open = was;
  }
  if (key) find(host, key)?.focus({ preventScroll: true });
}

/** @type {WeakMap<Element, string>} what each node was drawn from */
const drawn = new WeakMap();

/**
 * Tells whether a node is to be drawn anew, and remembers what from: a keystroke changes little of what is seen.
 *
 * @param {Element} node
 * @param {unknown} from all that its picture is made of
 */
export function differs(node, from) {
  const text = JSON.stringify(from) ?? "";
  if (drawn.get(node) === text) return false;
  drawn.set(node, text);
  return true;
}

/**
 * @param {Element} host
 * @param {string} key
 * @returns {HTMLElement|null}
 */
function find(host, key) {
  return host.querySelector(`[data-key="${CSS.escape(key)}"]`);
}

/** @param {string} id @returns {HTMLElement} */
export function byId(id) {
  const node = document.getElementById(id);
  if (!node) throw new Error(`no element ${id}`);
  return node;
}
