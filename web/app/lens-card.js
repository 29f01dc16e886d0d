/** One lens of the pair: its dials, the step keys, and what is known of it. */

import { dialText, mainFacts, moreFacts } from "./facts.js";
import { drawScene, legendMark, placeOf } from "./dial.js";
import { button, differs, el, redraw, svg } from "./dom.js";
import { removeBranch } from "./job.js";
import { stepPad } from "./step-pad.js";
import { eyeName, say, shown } from "./words.js";

/**
 * @typedef {import("./types.js").Eye} Eye
 * @typedef {import("./types.js").Report} Report
 * @typedef {import("./facts.js").Fact} Fact
 */

/** @param {Eye} eye @param {string} side @param {Report|null|undefined} report the base a step to that side leads to */
export function baseOf(eye, side, report) {
  const known = report?.[eye]?.step_bases?.[side];
  if (known || side === "up" || side === "down") return known ?? side;
  return (side === "right") === (eye === "right") ? "in" : "out";
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

/** @param {Eye} eye @param {import("./state.js").State} state */
export function clearKey(eye, state) {
  return button(
    say("page.read.clear"),
    () =>
      state.change((draft) => {
        removeBranch(draft, `readings.${eye}.prism`);
      }),
    { class: "step clear", "aria-label": say("page.read.clear_lens", { eye: eyeName(eye) }) },
  );
}

/**
 * @param {Eye} eye
 * @param {object} tools
 * @param {import("./state.js").State} tools.state
 * @param {ReturnType<typeof import("./steps.js").createSteps>} tools.steps
 * @param {(eye: Eye) => void} tools.enlarge opens the large eyepiece
 */
export function lensCard(eye, { state, steps, enlarge }) {
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

  const fineKey = button(
    say("page.read.fine"),
    () => {
      fine = !fine;
      fineKey.setAttribute("aria-pressed", String(fine));
    },
    { class: "step fine", "aria-pressed": "false", id: `fine-${eye}` },
  );
  const clear = clearKey(eye, state);
  const large = button(
    say("page.eyepiece.open"),
    () => enlarge(eye),
    { class: "enlarge", id: `eyepiece-${eye}`, "aria-label": say("page.eyepiece.open_lens", { eye: eyeName(eye) }) },
  );
  /** @type {Report|null} */
  let last = null;
  const pad = stepPad(
    {
      id: `step-${eye}`,
      act: (right, up) => steps.step(eye, right, up, fine ? "fine" : "step"),
      names: (side) => {
        const base = say(`page.bases.${baseOf(eye, side, last)}`);
        return { word: base, label: say("page.read.step", { eye: eyeName(eye), base }) };
      },
    },
    fineKey,
    clear,
  );

  const node = el(
    "section",
    { class: "card lens", "aria-labelledby": `lens-${eye}`, "data-eye": eye },
    el("header", {}, el("h2", { id: `lens-${eye}` }, say(`page.lenses.${eye}`)), first),
    el(
      "div",
      { class: "pictures" },
      el("div", { class: "overview-place" }, overview, waiting, large),
      el("div", { class: "close-place" }, close, pad.node),
    ),
    facts,
    el("details", { class: "quiet", "data-key": `more-${eye}` }, el("summary", {}, say("page.read.more")), more),
  );

  return {
    node,
    /** @param {Report|null} report */
    draw(report) {
      last = report;
      pad.draw();
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
 * @param {{marks: number, target: number}} [look]
 */
export function drawPicture(picture, scene, id, label, look) {
  picture.classList.toggle("absent", !scene);
  if (scene) drawScene(picture, scene, id, look);
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
