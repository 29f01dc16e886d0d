/** Every sentence comes from the words file, by code. Where a word is missing the code itself is shown. */

/** @type {any} */
let words = {};
let comma = false;
/** @type {string} */
let dates = "iso";

/** @param {object} all the groups of the words file */
export function useWords(all) {
  words = all;
}

/** @param {{decimal: string, date: string}} settings how this shop writes its decimal sign ("language": as the words' own language does) and its dates */
export function writeWith({ decimal, date }) {
  comma = (decimal === "language" ? say("page.language.decimal") : decimal) === "comma";
  dates = date;
}

/** @param {string} code @returns {string|undefined} */
function look(code) {
  if (!code) return undefined;
  let place = words;
  const steps = code.split(".");
  // Codes of the core may hold points themselves ("points.progressive.mounted"): take the longest key there is.
  for (let index = 0; index < steps.length; index += 1) {
    const rest = steps.slice(index).join(".");
    if (place && typeof place[rest] === "string") return place[rest];
    place = place?.[steps[index]];
  }
  return typeof place === "string" ? place : undefined;
}

/** @param {string} code */
export function has(code) {
  return look(code) !== undefined;
}

/**
 * The sentence of a code with its holes filled.
 *
 * @param {string} code e.g. "page.nav.order"
 * @param {Record<string, unknown>} [params] text, already formatted
 */
export function say(code, params = {}) {
  const sentence = look(code);
  if (sentence === undefined) return code;
  return sentence.replace(/\{(\w+)\}/g, (hole, name) => (name in params ? shown(params[name]) : hole));
}

/**
 * A text with numbers in it, as this shop writes its decimal sign. Swaps the sign, nothing else;
 * clause numbers ("5.1.4", "Z80.1") are left alone.
 *
 * @param {unknown} text
 */
export function shown(text) {
  const plain = text === null || text === undefined ? "" : String(text);
  return comma ? plain.replace(/(?<![\w.])(\d+)\.(\d+)(?![\w.]*\d)/g, "$1,$2") : plain;
}

/** Year, month and day, in the order and with the signs of each way of writing them. */
const DATES = {
  day: "$3/$2/$1",
  "day-point": "$3.$2.$1",
  month: "$2/$3/$1",
};

/**
 * A moment as this shop writes its dates. It is kept, and read, largest unit first.
 *
 * @param {string} moment as `stamp` makes it, "2026-12-01 15:20"
 */
export function dateText(moment) {
  const order = DATES[/** @type {keyof typeof DATES} */ (dates)];
  return order ? moment.replace(/^(\d{4})-(\d\d)-(\d\d)/, order) : moment;
}

/** @param {string} eye "right", "left" or "pair" */
export function eyeName(eye) {
  return say(`page.eyes.${eye}`);
}
