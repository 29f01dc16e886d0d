/** Our own keypad: digits, signs, the decimal sign, quarter endings, and the four bases. It edits text, nothing else. */

import { button, byId, el } from "./dom.js";
import { say } from "./words.js";
import { wantsKeypad } from "./settings.js";

/** @typedef {{text: string, start: number, end: number}} Edit */

/**
 * A text with a sign put before it, taking the place of the one there is.
 *
 * @param {string} text
 * @param {string} sign
 */
export function withSign(text, sign) {
  return sign + text.replace(/^\s*[-+\u2212]/, "").trimStart();
}

/**
 * A text with its decimals replaced by an ending such as "25".
 *
 * @param {string} text
 * @param {string} ending
 * @param {string} separator
 */
export function withEnding(text, ending, separator) {
  const whole = text.replace(/[.,].*$/, "");
  return `${/\d$/.test(whole) ? whole : `${whole}0`}${separator}${ending}`;
}

/** @param {HTMLInputElement} input deletes what is marked, else the character before the cursor */
function eraseBack(input) {
  const [start, end] = [input.selectionStart ?? 0, input.selectionEnd ?? 0];
  input.setRangeText("", start === end ? Math.max(0, start - 1) : start, end, "end");
}

const MOST_OF_SCREEN = 0.62;
const ROSE = ["in", "out", "up", "down"];

/**
 * @param {object} tools
 * @param {import("./settings.js").Settings} tools.settings
 * @param {(from: HTMLInputElement, back?: boolean) => void} tools.next
 * @param {(from: HTMLInputElement, base: string) => void} tools.setBase
 */
export function createKeypad({ settings, next, setBase }) {
  const host = byId("keypad");
  const place = el("p", { class: "keypad-place", "aria-hidden": "true" });
  /** @type {HTMLInputElement|null} */
  let field = null;
  let hidden = false;
  let cramped = false;

  /** @param {(input: HTMLInputElement) => void} change */
  function edit(change) {
    if (!field) return;
    change(field);
    field.dispatchEvent(new InputEvent("input", { bubbles: true }));
    say_();
  }

  /** @param {string} text */
  const type = (text) =>
    edit((input) =>
      input.setRangeText(text, input.selectionStart ?? input.value.length, input.selectionEnd ?? input.value.length, "end"),
    );

  /** @param {string} text */
  function whole(text) {
    return (/** @type {HTMLInputElement} */ input) => {
      input.value = text;
      input.setSelectionRange(text.length, text.length);
    };
  }

  function say_() {
    const label = field?.labels?.[0]?.textContent ?? "";
    const lens = field?.closest("section")?.querySelector("h2")?.textContent ?? "";
    place.replaceChildren(el("span", {}, `${lens} · ${label}`), el("strong", {}, field?.value ?? ""));
  }

  const separator = () => (settings.decimal === "comma" ? "," : ".");
  /** @param {string} label @param {() => void} act @param {string} [kind] @param {string} [name] */
  const key = (label, act, kind = "", name = "") => {
    const node = button(label, act, {
      class: `pad-key ${kind}`,
      tabindex: -1,
      "data-repeats": true,
      ...(name ? { "aria-label": name } : {}),
    });
    // The field keeps the focus; the key acts on it.
    node.addEventListener("pointerdown", (event) => event.preventDefault());
    return node;
  };
  const digit = (/** @type {string} */ text) => key(text, () => type(text), `digit k${text}`);
  const point = key(".", () => type(separator()), "digit point", say("page.pad.decimal"));

  /** @param {string} ending */
  const quarter = (ending) =>
    key(
      `.${ending}`,
      () => edit((input) => whole(withEnding(input.value, ending, separator()))(input)),
      `quarter q${ending}`,
      say("page.pad.ending", { ending }),
    );
  const keys = [
    ...["7", "8", "9", "4", "5", "6", "1", "2", "3", "0"].map(digit),
    point,
    key("+", () => edit((input) => whole(withSign(input.value, "+"))(input)), "plus", say("page.pad.plus")),
    key("\u2212", () => edit((input) => whole(withSign(input.value, "-"))(input)), "minus", say("page.pad.minus")),
    key("\u232b", () => edit(eraseBack), "erase", say("page.pad.back")),
    ...["00", "25", "50", "75"].map(quarter),
    key(say("page.pad.clear"), () => edit(whole("")), "clear"),
    key(say("page.pad.previous"), () => field && next(field, true), "previous"),
    key(say("page.pad.hide"), () => hide(), "hide"),
    key(say("page.pad.next"), () => field && next(field), "next"),
  ];
  const rose = ROSE.map((base) => key(say(`page.bases.${base}`), () => field && setBase(field, base), `rose ${base}`));
  host.append(
    el(
      "div",
      { class: "pad" },
      place,
      el("div", { class: "pad-keys" }, ...keys),
      el("div", { class: "pad-rose", "aria-label": say("page.pad.rose"), role: "group" }, ...rose),
    ),
  );

  function hide() {
    hidden = true;
    refresh();
  }

  /** Whether our keypad is to be used at all: asked for, not put away, and with room on this screen. */
  function usable() {
    return wantsKeypad(settings) && !hidden && !cramped;
  }

  /** @param {HTMLInputElement} input */
  function mode(input) {
    input.setAttribute("inputmode", usable() ? "none" : "decimal");
  }

  function refresh() {
    const root = document.documentElement;
    const path = field?.dataset["path"] ?? "";
    host.hidden = !usable() || field === null;
    root.classList.toggle("pad-open", !host.hidden);
    host.classList.toggle("with-rose", /\.(prism\[\d+\]|compensator)\./.test(path));
    // The rose lies as the dial does: in is to the right for the right lens.
    host.classList.toggle("right-lens", /^(readings\.)?right\./.test(path));
    point.textContent = separator();
    if (field) say_();
    if (!host.hidden && host.offsetHeight > MOST_OF_SCREEN * window.innerHeight) {
      cramped = true;
      refresh();
      return;
    }
    for (const input of document.querySelectorAll("input[data-kind=number], input[data-kind=power]"))
      {mode(/** @type {HTMLInputElement} */ (input));}
  }
  window.addEventListener("resize", () => {
    cramped = false;
    refresh();
  });

  document.addEventListener("focusin", ({ target }) => {
    const kind = target instanceof HTMLInputElement ? target.dataset["kind"] : "";
    field = kind === "number" || kind === "power" ? /** @type {HTMLInputElement} */ (target) : null;
    refresh();
  });
  document.addEventListener("focusout", () => {
    // A moment later, so that the next field may have the focus.
    setTimeout(() => {
      if (document.activeElement === document.body || document.activeElement === null) {
        field = null;
        refresh();
      }
    });
  });

  return {
    refresh,
    /** The person asked for the keypad, or for it to go. */
    toggle() {
      const open = wantsKeypad(settings) && !hidden;
      settings.keypad = open ? "off" : "on";
      hidden = false;
      refresh();
    },
  };
}
