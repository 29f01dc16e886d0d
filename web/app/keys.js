/** Keys: Enter moves on and never submits (a scanner ends its burst with it); Ctrl+Z and Ctrl+Y. No single-key shortcuts. */

/** @param {Document|Element} root @returns {HTMLInputElement[]} the text fields in view, in order */
export function fieldsInView(root) {
  return /** @type {HTMLInputElement[]} */ ([...root.querySelectorAll("input[data-path]")]).filter(
    (input) => input.checkVisibility?.({ visibilityProperty: true }) ?? input.offsetParent !== null,
  );
}

/**
 * @param {HTMLInputElement} from
 * @param {boolean} [back]
 */
export function moveOn(from, back = false) {
  const all = fieldsInView(document);
  const next = all[all.indexOf(from) + (back ? -1 : 1)];
  if (!next) return;
  next.focus();
  next.select();
}

/** @param {KeyboardEvent} event @returns {"undo"|"redo"|null} what Ctrl with Z or Y asks for */
function wishOf(event) {
  if (!(event.ctrlKey || event.metaKey) || event.altKey) return null;
  const key = event.key.toLowerCase();
  if (key === "z" && !event.shiftKey) return "undo";
  return key === "y" || key === "z" ? "redo" : null;
}

/**
 * @param {object} tools
 * @param {import("./state.js").State} tools.state
 */
export function listenToKeys({ state }) {
  document.addEventListener("keydown", (event) => {
    const { target } = event;
    if (event.key === "Enter" && target instanceof HTMLInputElement && target.type === "text") {
      event.preventDefault();
      state.seal();
      moveOn(target);
      return;
    }
    const wish = wishOf(event);
    if (!wish || (target instanceof HTMLElement && target.matches("textarea, #f-initials"))) return;
    state[wish]();
    event.preventDefault();
  });
  document.addEventListener("focusout", () => state.seal());
}
