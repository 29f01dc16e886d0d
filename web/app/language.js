/** Which language the page speaks. It is chosen before anything is drawn: another choice opens the page anew. */
import all from "./generated/words.js";
import { useWords } from "./words.js";

const FIRST = "en";

/** The languages there are. */
export const LANGUAGES = Object.keys(all);

/**
 * The language chosen, or else the first of the device's own that there is.
 *
 * @param {{language: string}} settings
 * @param {readonly string[]} [wanted] the device's, the one it likes best first
 * @returns {string} one of LANGUAGES
 */
export function languageOf({ language }, wanted = navigator.languages) {
  const known = [language, ...wanted].map((tag) => tag.split("-")[0] ?? "").find((tag) => LANGUAGES.includes(tag));
  return known ?? FIRST;
}

/** @param {string} language one of LANGUAGES; its words are text until then, since most of them are never read */
export function speak(language) {
  useWords(JSON.parse(all[language] ?? "{}"));
  document.documentElement.lang = language;
}
