/** Further readings of the same lens: the one that stands is put aside and the lens is read again. */

import { button, el, redraw } from "./dom.js";
import { removeBranch } from "./job.js";
import { usedRows } from "./prism-rows.js";
import { say, shown } from "./words.js";

/** @typedef {import("./types.js").Entries} Entries */

/** @param {Entries} entries @param {string} place @returns {string} a reading as it was typed */
function asTyped(entries, place) {
  return usedRows(entries, `${place}.prism`)
    .map((row) => {
      const part = `${place}.prism[${row}]`;
      const base =
        entries[`${part}.base`] ?? [entries[`${part}.base.degrees`], entries[`${part}.base.side`]].filter(Boolean).join(" ");
      const word = ["in", "out", "up", "down"].includes(base) ? say(`page.bases.${base}`) : base;
      return [entries[`${part}.amount`], word].filter(Boolean).join(" ");
    })
    .join(", ");
}

/** @param {Entries} draft @param {string} from @param {string} to moves a branch, in place */
function move(draft, from, to) {
  for (const path of Object.keys(draft)) {
    if (path.startsWith(`${from}.`) || path.startsWith(`${from}[`)) {
      draft[to + path.slice(from.length)] = draft[path] ?? "";
      delete draft[path];
    }
  }
}

/**
 * One touch puts the reading that stands aside and begins the next. A compensator stays as it is set.
 *
 * @param {string} eye
 * @param {import("./state.js").State} state
 */
export function againKey(eye, state) {
  const place = `readings.${eye}`;
  const key = button(
    say("page.read.again"),
    () =>
      state.change((draft) => {
        const next = (usedRows(draft, `${place}.repeats`).at(-1) ?? -1) + 1;
        move(draft, `${place}.prism`, `${place}.repeats[${next}].prism`);
        for (const part of ["amount", "base", "base.degrees", "base.side"]) {
          const text = draft[`${place}.compensator.${part}`];
          if (text) draft[`${place}.repeats[${next}].compensator.${part}`] = text;
        }
      }),
    { class: "again" },
  );
  /** @param {Entries} entries */
  function gate(entries) {
    key.disabled = usedRows(entries, `${place}.prism`).length === 0;
  }
  state.subscribe(gate);
  gate(state.entries);
  return key;
}

/**
 * @param {string} eye
 * @param {import("./state.js").State} state
 */
export function repeats(eye, state) {
  const place = `readings.${eye}`;
  const list = el("ul", { class: "repeats" });
  /** @param {Entries} entries */
  function draw(entries) {
    redraw(
      list,
      ...usedRows(entries, `${place}.repeats`).map((row, index) =>
        el(
          "li",
          {},
          el(
            "span",
            {},
            say("page.read.repeat", { number: index + 1, reading: shown(asTyped(entries, `${place}.repeats[${row}]`)) }),
          ),
          button(say("page.read.drop"), () => state.change((draft) => removeBranch(draft, `${place}.repeats[${row}]`)), {
            "aria-label": say("page.read.drop_repeat", { number: index + 1 }),
          }),
        ),
      ),
    );
  }
  state.subscribe(draw);
  draw(state.entries);
  return el("div", { class: "repeat" }, againKey(eye, state), list);
}
