/** How this tablet shows things. Not part of any job; a loss of it would cost nothing. */

const KEY = "wedgewright.settings";

/**
 * @typedef {object} Settings
 * @property {"auto"|"light"|"dark"} theme
 * @property {string} language "auto" for the device's own, or one of language.LANGUAGES
 * @property {"language"|"point"|"comma"} decimal as the language has it, or one of the two
 * @property {"auto"|"on"|"off"} keypad
 * @property {string} view
 * @property {"360"|"180"} bases
 * @property {"iso"|"day"|"day-point"|"month"} date order and signs of day, month and year
 * @property {"any"|"a4"|"letter"} paper
 * @property {"right"|"left"} hand the side of the large eyepiece's keys
 */

/** @type {Settings} */
const DEFAULTS = {
  theme: "auto",
  language: "auto",
  decimal: "language",
  keypad: "auto",
  view: "order",
  bases: "360",
  date: "iso",
  paper: "any",
  hand: "right",
};

/** @returns {Settings} */
export function loadSettings() {
  try {
    return { ...DEFAULTS, ...JSON.parse(localStorage.getItem(KEY) ?? "{}") };
  } catch {
    return { ...DEFAULTS };
  }
}

/** @param {Settings} settings */
export function saveSettings(settings) {
  try {
    localStorage.setItem(KEY, JSON.stringify(settings));
  } catch {
    // Storage refused: the setting holds until the page is closed.
  }
}

export function eraseSettings() {
  try {
    localStorage.removeItem(KEY);
  } catch {
    // Nothing was stored then.
  }
}

/** @param {Settings} settings colours and paper */
export function applyLook(settings) {
  const root = document.documentElement;
  if (settings.theme === "auto") delete root.dataset.theme;
  else root.dataset.theme = settings.theme;
  root.dataset.paper = settings.paper;
}

/** @param {Settings} settings whether our own keypad opens at a field */
export function wantsKeypad(settings) {
  if (settings.keypad !== "auto") return settings.keypad === "on";
  return matchMedia("(pointer: coarse)").matches;
}
