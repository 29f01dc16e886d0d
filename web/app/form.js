/** The form: joins the declared fields to the state, and answers back to the fields. */

import { choiceControl, flagControl, selectControl, textControl } from "./controls.js";
import { redraw } from "./dom.js";
import { faultText, isAsk } from "./faults.js";
import { say, shown } from "./words.js";

/**
 * @typedef {import("./types.js").Entries} Entries
 * @typedef {import("./types.js").Fault} Fault
 * @typedef {import("./fields.js").FieldSpec} FieldSpec
 * @typedef {import("./controls.js").Control} Control
 * @typedef {ReturnType<typeof createForm>} Form
 */

const MAKERS = { power: textControl, number: textControl, text: textControl, choice: choiceControl, flag: flagControl };

/** @param {import("./state.js").State} state */
export function createForm(state) {
  /** @type {Map<string, Control>} */
  const controls = new Map();
  /** @type {{echo: Record<string, string>, faults: Fault[]}} */
  let answer = { echo: {}, faults: [] };

  /** @param {string} path @param {Control} control */
  function keep(path, control) {
    controls.set(path, control);
    control.show(state.entries[path] ?? "");
    paint(path, control);
    return control.node;
  }

  /** @param {string} path @param {Control} control */
  function paint(path, control) {
    const fault = answer.faults.find(({ field }) => field === path || (control.list && field.startsWith(`${path}[`)));
    const echo = answer.echo[path];
    const text = fault ? faultText(fault) : echo && control.echoes ? shown(echo) : "";
    control.mark(Boolean(fault));
    const kind = fault ? (isAsk(fault) ? "ask" : "wrong") : "echo";
    const look = text ? kind : "";
    if (control.node.dataset["state"] !== look) control.node.dataset["state"] = look;
    if (control.line.textContent !== text) control.line.textContent = text;
  }

  return {
    /** @param {FieldSpec} spec */
    field(spec) {
      const make = MAKERS[/** @type {keyof typeof MAKERS} */ (spec.kind)];
      return keep(
        spec.path,
        make(spec, (text) => state.set(spec.path, text)),
      );
    },
    /** @param {FieldSpec[]} specs */
    fields(specs) {
      return specs.map((spec) => this.field(spec));
    },
    /** @param {FieldSpec} spec @param {(value: string) => string} nameOf */
    select(spec, nameOf) {
      return keep(
        spec.path,
        selectControl(spec, (text) => state.set(spec.path, text), nameOf),
      );
    },
    /** @param {string} path @param {Control} control one that is made elsewhere */
    adopt: (path, control) => keep(path, control),
    /** @param {string} prefix forgets fields that are drawn anew */
    forget(prefix) {
      for (const path of controls.keys()) if (path.startsWith(prefix)) controls.delete(path);
    },
    /** @param {Entries} entries */
    show(entries) {
      for (const [path, control] of controls) control.show(entries[path] ?? "");
    },
    /** @param {{echo: Record<string, string>, faults: Fault[]}} next by the page's own paths */
    answer(next) {
      answer = next;
      for (const [path, control] of controls) paint(path, control);
    },
    /** @param {string} path the control of a field or of the nearest one to it */
    nearest(path) {
      let place = path;
      while (place) {
        for (const candidate of [place, `${place}.amount`, `${place}.degrees`, `${place}.side`]) {
          const control = controls.get(candidate);
          if (control) return control;
        }
        const shorter = place.replace(/(\.[^.[\]]+|\[\d+\]|^[^.[\]]+)$/, "");
        if (shorter === place) break;
        place = shorter;
      }
      return null;
    },
  };
}

/**
 * A group of fields that is drawn anew when `signature` changes (rows that come and go).
 *
 * @param {Element} host
 * @param {(entries: Entries) => string} signature
 * @param {(entries: Entries) => (Node|null)[]} draw
 */
export function changing(host, signature, draw) {
  let last = "";
  return (/** @type {Entries} */ entries) => {
    const now = signature(entries);
    if (now === last) return;
    last = now;
    redraw(host, ...draw(entries));
  };
}

/** @param {string} code */
export function legend(code) {
  return say(code);
}
