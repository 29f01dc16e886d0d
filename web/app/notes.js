/** The core's notes as a list, those of one subject or all. */

import { el } from "./dom.js";
import { say } from "./words.js";

/** @typedef {import("./types.js").Note} Note */

/** @param {Note[]} notes */
export function noteList(notes) {
  return el(
    "ul",
    { class: "notes" },
    ...notes.map((note) =>
      el(
        "li",
        { class: `note ${note.severity}` },
        el("strong", {}, say(`page.severities.${note.severity}`)),
        " ",
        say(`notes.${note.code}`, note.params),
      ),
    ),
  );
}
