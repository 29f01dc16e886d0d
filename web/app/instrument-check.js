/**
 * The guided check of the lens meter with a known prism. What is seen is kept with the draft; what it settles the core
 * says, and it counts for this bench when the person takes it.
 */

import { placeOf } from "./dial.js";
import { button, differs, el, redraw, svg } from "./dom.js";
import { faultText } from "./faults.js";
import { CHECK_COMPENSATOR } from "./fields.js";
import { fromJob, removeBranch, settleBench, toJob } from "./job.js";
import { stamp } from "./keeping.js";
import { drawPicture } from "./lens-card.js";
import { usedRows } from "./prism-rows.js";
import { stepPad } from "./step-pad.js";
import { say, shown } from "./words.js";

/**
 * @typedef {import("./types.js").Entries} Entries
 * @typedef {import("./types.js").Said} Said
 * @typedef {{next: string, places: {zero: string|null, seen: string[]}, enough: number, settled: boolean, findings: Said[], wrong: Said[],
 *   suggested: {amount: string, base: string}, instrument: object, scene: import("./types.js").Scene}} Answer
 */

const PLACE = "page-check";
const LARGE = { marks: 0.8, target: 2.5 };
const LOOKS = ["zero", "known", "scale", "again"];

/** @param {Entries} entries @returns {Record<string, unknown>} the looks as the core reads them */
export function looksOf(entries) {
  const own = Object.entries(entries).filter(([path]) => path.startsWith(`${PLACE}.`));
  const { job } = toJob(Object.fromEntries(own.map(([path, text]) => [path.slice(PLACE.length + 1), text])));
  delete job["format"];
  delete job["begun"];
  return job;
}

/** @param {Entries} entries @returns {string} where the place given last is kept, "" where none is */
function latest(entries) {
  const row = usedRows(entries, `${PLACE}.seen`).at(-1);
  if (row !== undefined) return `${PLACE}.seen[${row}]`;
  return entries[`${PLACE}.zero.x`] ? `${PLACE}.zero` : "";
}

/**
 * @param {object} tools
 * @param {import("./form.js").Form} tools.form
 * @param {import("./state.js").State} tools.state
 * @param {import("./types.js").Engine} tools.engine
 * @param {(found: {at: string, fields: Entries, findings: Said[]}) => void} tools.taken
 */
export function instrumentCheck({ form, state, engine, taken }) {
  /** @type {Answer|null} */
  let answer = null;
  let asked = "";

  const picture = /** @type {SVGSVGElement} */ (svg("svg", { class: "dial check-dial", role: "img", id: "check-dial" }));
  const findings = el("ul", { class: "check-findings" });
  const said = el("div", { role: "status" }, findings);
  const take = button(say("page.check_bench.take"), takeIt, { class: "primary", id: "check-take" });
  const begin = button(say("page.check_bench.begin"), () => state.set(`${PLACE}.begun`, "true"), { id: "check-begin" });
  const suggestion = button("", suggest, { id: "check-suggested" });
  const lines = Object.fromEntries(LOOKS.map((look) => [look, el("span", { class: "look-answer" })]));
  const redo = Object.fromEntries(LOOKS.map((look) => [look, redoKey(look)]));
  const pads = /** @type {const} */ (["step", "tenth"]).map((size) =>
    stepPad(
      {
        id: `check-${size}`,
        act: (right, up) => move(right, up, size),
        names: (side) => ({
          word: say(`page.check_bench.sides.${side}`),
          label: say("page.check_bench.step", { size: say(`page.check_bench.sizes.${size}`), side: say(`page.check_bench.sides.${side}`) }),
        }),
      },
      el("span", { class: "step-size" }, say(`page.check_bench.sizes.${size}`)),
    ),
  );
  const steps = LOOKS.map((look) => el("li", { class: "look", id: `look-${look}` }, ...lookParts(look)));
  const body = el(
    "div",
    { class: "check-body" },
    el("ol", { class: "looks" }, ...steps),
    el("div", { class: "check-rings" }, picture, el("div", { class: "eyepiece-pads" }, ...pads.map(({ node }) => node))),
    said,
    el("div", { class: "keys-row" }, take, button(say("page.check_bench.anew"), () => clear(PLACE), { id: "check-anew" })),
  );

  /** @param {string} look */
  function redoKey(look) {
    return button(say("page.check_bench.redo"), () => clear(...branches(look)), {
      id: `redo-${look}`,
      hidden: true,
      "aria-label": say("page.check_bench.redo_look", { look: say(`page.check_bench.looks.${look}`) }),
    });
  }

  /** @param {string} look @returns {Node[]} */
  function lookParts(look) {
    const head = el(
      "div",
      { class: "look-head" },
      el("strong", {}, say(`page.check_bench.looks.${look}`)),
      lines[look],
      redo[look],
    );
    const what = el("p", { class: "help" }, say(`page.check_bench.how.${look}`));
    if (look === "zero") {
      return [head, what, button(say("page.check_bench.middle"), () => put(`${PLACE}.zero`, { x: "0", y: "0" }), { id: "check-middle" })];
    }
    if (look === "again") return [head, what];
    const group = `${PLACE}.${look}`;
    const amounts = form.fields([
      { path: `${group}.amount`, kind: "number", label: "prism_amount" },
      { path: `${group}.base`, kind: "number", label: "base_360" },
    ]);
    return [head, what, look === "scale" ? form.field(CHECK_COMPENSATOR) : suggestion, el("div", { class: "grid two" }, ...amounts)];
  }

  /** @param {string} look @returns {string[]} what is forgotten where it is looked anew */
  function branches(look) {
    const seen = usedRows(state.entries, `${PLACE}.seen`).map((row) => `${PLACE}.seen[${row}]`);
    const own = { zero: [`${PLACE}.zero`], known: seen, scale: [`${PLACE}.scale`, `${PLACE}.compensator`] };
    return own[/** @type {keyof typeof own} */ (look)] ?? seen.slice(1);
  }

  /** @param {...string} paths */
  function clear(...paths) {
    state.change((draft) => paths.forEach((path) => removeBranch(draft, path)));
  }

  /** @param {string} path @param {{x: string, y: string}} place */
  function put(path, place) {
    state.change((draft) => {
      draft[`${path}.x`] = place.x;
      draft[`${path}.y`] = place.y;
    });
  }

  function suggest() {
    const suggested = answer?.suggested;
    if (!suggested) return;
    state.change((draft) => {
      draft[`${PLACE}.known.amount`] = suggested.amount;
      draft[`${PLACE}.known.base`] = suggested.base;
    });
  }

  /** @param {object} how touched, or by steps from another place @param {string} path */
  async function ofRings(how, path) {
    const given = await engine.ask({ do: "place", instrument: instrument(), ...how }, { lane: "reading" });
    if (given?.["x"]) put(path, /** @type {any} */ (given));
  }

  /** @param {number} right @param {number} up @param {string} size */
  function move(right, up, size) {
    const path = latest(state.entries);
    const from = path ? { x: state.entries[`${path}.x`] ?? "0", y: state.entries[`${path}.y`] ?? "0" } : {};
    ofRings({ from, right, up, size }, path || `${PLACE}.zero`);
  }

  picture.addEventListener("click", (event) => {
    const touched = placeOf(picture, event);
    const rows = usedRows(state.entries, `${PLACE}.seen`);
    // While the compensator is turned the target moves; where it then stands is no reading.
    if (!touched || !answer || answer.next === "scale") return;
    ofRings(touched, answer.next === "zero" ? `${PLACE}.zero` : `${PLACE}.seen[${(rows.at(-1) ?? -1) + 1}]`);
  });

  function instrument() {
    return toJob(state.entries).job["instrument"] ?? {};
  }

  function takeIt() {
    if (!answer?.settled) return;
    const at = stamp(new Date());
    const fields = { ...fromJob({ instrument: answer.instrument }), "instrument.checked_on": at.split(" ")[0] ?? at };
    taken({ at, fields, findings: answer.findings });
    state.change((draft) => {
      settleBench(draft, fields);
      removeBranch(draft, PLACE);
    });
  }

  async function ask() {
    const request = { do: "check-instrument", instrument: instrument(), ...looksOf(state.entries) };
    const signature = JSON.stringify(request);
    if (signature === asked) return;
    asked = signature;
    const given = await engine.ask(request, { lane: "check-instrument" });
    if (!given || signature !== asked) return;
    if (given["errors"]) {
      redraw(findings, ...given["errors"].map((/** @type {any} */ fault) => el("li", { class: "wrong" }, faultText(fault))));
      take.disabled = true;
      return;
    }
    answer = /** @type {Answer} */ (/** @type {unknown} */ (given));
    show(answer);
  }

  /** @param {Answer} given */
  function show(given) {
    drawPicture(picture, given.scene, "check-dial", say("page.check_bench.picture"), LARGE);
    take.disabled = !given.settled;
    const { amount, base } = given.suggested;
    suggestion.textContent = say("page.check_bench.suggested", { amount, base });
    LOOKS.forEach((look, index) => {
      if (look === given.next) steps[index]?.setAttribute("aria-current", "step");
      else steps[index]?.removeAttribute("aria-current");
    });
    showLooks(given);
    if (!differs(findings, [given.findings, given.wrong, shown("0.5")])) return;
    redraw(
      findings,
      ...given.wrong.map(({ code, params }) => el("li", { class: "wrong" }, say(`instrument_check_wrong.${code}`, params))),
      ...given.findings.map(({ code, params }) => el("li", {}, say(`instrument_check.${code}`, params))),
    );
  }

  /** @param {Answer} given what was seen, at each look, and whether it can be looked at anew */
  function showLooks({ places: { zero, seen }, enough }) {
    const { entries } = state;
    const none = entries[`${PLACE}.compensator`];
    const looked = [
      { look: "zero", text: zero ?? "", done: zero },
      { look: "known", text: seen[0] ?? "", done: seen[0] },
      { look: "scale", text: none ? say("page.values.check_compensator.none") : "", done: none ?? entries[`${PLACE}.scale.amount`] },
      { look: "again", text: say("page.check_bench.count", { count: seen.length, enough }), done: seen[1] },
    ];
    for (const { look, text, done } of looked) {
      const [line, key] = [lines[look], redo[look]];
      if (line) line.textContent = shown(text);
      if (key) key.hidden = !done;
    }
  }

  /** @param {Entries} entries */
  function draw(entries) {
    const began = Object.keys(entries).some((path) => path.startsWith(`${PLACE}.`));
    begin.hidden = began;
    body.hidden = !began;
  }

  state.subscribe((entries) => {
    draw(entries);
    if (!body.hidden) ask();
  });
  draw(state.entries);
  return { node: el("div", { class: "instrument-check" }, begin, body), ask };
}
