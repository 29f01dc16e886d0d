/** One lens of the pair: its dials, the step keys, and what is known of it. */

import { dialText, mainFacts, moreFacts } from "./facts.js";
import { drawScene, legendMark, placeOf } from "./dial.js";
import { button, differs, el, redraw, svg } from "./dom.js";
import { removeBranch } from "./job.js";
import { eyeName, say, shown } from "./words.js";

/**
 * @typedef {import("./types.js").Eye} Eye
 * @typedef {import("./types.js").Report} Report
 * @typedef {import("./facts.js").Fact} Fact
 */

/** The arrows: where the target goes, seen by the observer, and the base that this is. */
const ARROWS = /** @type {const} */ ([
  { key: "up", right: 0, up: 1, path: "M12 4 L20 18 L4 18 Z" },
  { key: "left", right: -1, up: 0, path: "M4 12 L18 4 L18 20 Z" },
  { key: "down", right: 0, up: -1, path: "M12 20 L4 6 L20 6 Z" },
  { key: "right", right: 1, up: 0, path: "M20 12 L6 4 L6 20 Z" },
]);

/** @param {Eye} eye @param {string} arrow the base a step to that side leads to */
function baseOf(eye, arrow) {
  if (arrow === "up" || arrow === "down") return arrow;
  return (arrow === "right") === (eye === "right") ? "in" : "out";
}

/** @param {string} text broken, where there is no room, only before what stands in brackets */
function pieces(text) {
  return text.split(/(?= \()/).flatMap((piece) => [el("span", { class: "piece" }, piece.trim()), " "]);
}

/** @param {Fact[]} facts */
export function factList(facts) {
  return el(
    "dl",
    { class: "facts" },
    ...facts.map(({ key, mark, name, texts }) =>
      el(
        "div",
        { class: `fact fact-${key}` },
        el("dt", {}, mark ? legendMark(mark) : el("span", { class: "legend" }), el("span", {}, name)),
        el("dd", {}, ...texts.map((text, index) => el("span", { class: index ? "more" : "first" }, ...pieces(text)))),
      ),
    ),
  );
}

/**
 * @param {Eye} eye
 * @param {object} tools
 * @param {import("./state.js").State} tools.state
 * @param {ReturnType<typeof import("./steps.js").createSteps>} tools.steps
 */
export function lensCard(eye, { state, steps }) {
  const overview = /** @type {SVGSVGElement} */ (svg("svg", { class: "dial overview", role: "img", id: `dial-${eye}` }));
  const close = /** @type {SVGSVGElement} */ (svg("svg", { class: "dial close", role: "img", id: `close-${eye}` }));
  const first = el("p", { class: "hint" });
  const facts = el("div");
  const more = el("div");
  const waiting = el("p", { class: "waiting" }, say("page.read.no_dial"));
  let fine = false;

  for (const picture of [overview, close]) {
    picture.addEventListener("click", (event) => {
      const place = placeOf(picture, event);
      if (place) steps.touch(eye, place);
    });
  }

  const arrows = ARROWS.map(({ key, right, up, path }) => {
    const base = say(`page.bases.${baseOf(eye, key)}`);
    return button(
      base,
      () => steps.step(eye, right, up, fine),
      {
        class: `step ${key}`,
        "data-repeats": true,
        id: `step-${eye}-${key}`,
        "aria-label": say("page.read.step", { eye: eyeName(eye), base }),
      },
      svg("svg", { viewBox: "0 0 24 24", "aria-hidden": "true" }, svg("path", { d: path })),
      el("span", {}, base),
    );
  });
  const fineKey = button(
    say("page.read.fine"),
    () => {
      fine = !fine;
      fineKey.setAttribute("aria-pressed", String(fine));
    },
    { class: "step fine", "aria-pressed": "false", id: `fine-${eye}` },
  );
  const clear = button(
    say("page.read.clear"),
    () =>
      state.change((draft) => {
        removeBranch(draft, `readings.${eye}.prism`);
      }),
    { class: "step clear", "aria-label": say("page.read.clear_lens", { eye: eyeName(eye) }) },
  );

  const node = el(
    "section",
    { class: "card lens", "aria-labelledby": `lens-${eye}`, "data-eye": eye },
    el("header", {}, el("h2", { id: `lens-${eye}` }, say(`page.lenses.${eye}`)), first),
    el(
      "div",
      { class: "pictures" },
      el("div", { class: "overview-place" }, overview, waiting),
      el("div", { class: "close-place" }, close, el("div", { class: "step-keys" }, fineKey, ...arrows, clear)),
    ),
    facts,
    el("details", { class: "quiet", "data-key": `more-${eye}` }, el("summary", {}, say("page.read.more")), more),
  );

  return {
    node,
    /** @param {Report|null} report */
    draw(report) {
      const lens = report?.[eye];
      const scenes = report?.scenes?.[eye];
      node.classList.toggle("empty", !lens);
      waiting.hidden = Boolean(scenes);
      drawPicture(overview, scenes?.dial, `dial-${eye}`, lens ? dialText(eye, lens) : "");
      drawPicture(close, scenes?.close, `close-${eye}`, say("page.dial.close", { eye: eyeName(eye) }));
      drawFacts(facts, lens ? mainFacts(lens) : []);
      drawFacts(more, lens ? moreFacts(lens) : []);
      first.textContent = lens ? hint(eye, report, lens) : "";
    },
  };
}

/** @param {Element} host @param {Fact[]} facts */
function drawFacts(host, facts) {
  if (differs(host, facts)) redraw(host, facts.length ? factList(facts) : null);
}

/**
 * @param {SVGSVGElement} picture
 * @param {import("./types.js").Scene|undefined} scene
 * @param {string} id
 * @param {string} label
 */
function drawPicture(picture, scene, id, label) {
  picture.classList.toggle("absent", !scene);
  if (scene) drawScene(picture, scene, id);
  picture.setAttribute("aria-label", label || say("page.read.no_dial"));
}

/** @param {Eye} eye @param {Report|null|undefined} report @param {import("./types.js").LensReport} lens one short line beside the name */
function hint(eye, report, lens) {
  const parts = [];
  if (report?.read_first?.eye === eye) parts.push(say("page.read.first"));
  if (lens.on_rings === false) parts.push(say("page.read.off_rings"));
  if (lens.on_rings === true) parts.push(say("page.read.on_rings"));
  return shown(parts.join(" · "));
}
