/**
 * The large eyepiece: one lens's dial as large as the screen allows, with every key in reach of one thumb. It shows and
 * changes the same reading as the small dials; only its size and its keys are its own.
 */

import { placeOf } from "./dial.js";
import { button, differs, el, redraw, svg } from "./dom.js";
import { dialText, mainFacts } from "./facts.js";
import { baseOf, clearKey, drawPicture, factList } from "./lens-card.js";
import { againKey } from "./repeats.js";
import { saveSettings } from "./settings.js";
import { stepPad } from "./step-pad.js";
import { EYES } from "./types.js";
import { eyeName, say, shown } from "./words.js";

/**
 * @typedef {import("./types.js").Eye} Eye
 * @typedef {import("./types.js").Report} Report
 * @typedef {import("./state.js").State} State
 * @typedef {ReturnType<typeof import("./steps.js").createSteps>} Steps
 */

const SIZES = /** @type {const} */ (["step", "tenth"]);
const LARGE = { marks: 0.75, target: 2.8 };
const BESIDE = new Set(["expected", "read", "compensator"]);

/** @param {Eye} eye @returns {Eye} */
function opposite(eye) {
  return eye === "right" ? "left" : "right";
}

/**
 * What is shown of one lens.
 *
 * @param {Eye} eye
 * @param {{state: State, steps: Steps, compensator: HTMLElement}} tools
 */
function stageOf(eye, { state, steps, compensator }) {
  const picture = /** @type {SVGSVGElement} */ (svg("svg", { class: "dial large", role: "img", id: `large-${eye}` }));
  const facts = el("div", { class: "eyepiece-facts" });
  const slot = el("div", { class: "eyepiece-compensator" });
  const home = compensator.parentElement;
  /** @type {Report|null} */
  let last = null;

  picture.addEventListener("click", (event) => {
    const place = placeOf(picture, event);
    if (place) steps.touch(eye, place);
  });
  const pads = SIZES.map((size) => {
    const caption = el("span", { class: "step-size" });
    const pad = stepPad(
      {
        id: `large-${eye}-${size}`,
        act: (right, up) => steps.step(eye, right, up, size),
        names: (side) => {
          const base = say(`page.bases.${baseOf(eye, side, last)}`);
          return { word: base, label: say("page.eyepiece.step", { eye: eyeName(eye), base, size: amountOf(size) }) };
        },
      },
      caption,
    );
    return { size, caption, pad };
  });

  /** @param {"step"|"tenth"} size @returns {string} */
  function amountOf(size) {
    return shown(last?.instrument?.steps[size] ?? "");
  }

  return {
    eye,
    node: el(
      "div",
      { class: "eyepiece-stage" },
      picture,
      el(
        "div",
        { class: "eyepiece-side" },
        facts,
        slot,
        el("div", { class: "eyepiece-keys" }, againKey(eye, state), clearKey(eye, state)),
        el("div", { class: "eyepiece-pads" }, ...pads.map(({ pad }) => pad.node)),
      ),
    ),
    /** The setting's fields are the same ones as under the typed readings, so they are lent. */
    borrow: () => slot.append(compensator),
    giveBack: () => home?.append(compensator),
    /** @param {Report|null} report */
    draw(report) {
      last = report;
      for (const { size, caption, pad } of pads) {
        caption.textContent = say("page.eyepiece.size", { size: amountOf(size) });
        pad.draw();
      }
      const lens = report?.[eye];
      drawPicture(picture, report?.scenes?.[eye]?.dial, `large-${eye}`, lens ? dialText(eye, lens) : "", LARGE);
      const rows = lens ? mainFacts(lens).filter(({ key }) => BESIDE.has(key)) : [];
      if (differs(facts, [rows, shown("0.5")])) redraw(facts, rows.length ? factList(rows) : null);
    },
  };
}

/**
 * @param {object} tools
 * @param {State} tools.state
 * @param {Steps} tools.steps
 * @param {import("./settings.js").Settings} tools.settings
 * @param {Record<Eye, HTMLElement>} tools.compensators the setting's fields of each lens, in their place under the typed readings
 * @param {(open: boolean) => void} tools.changed
 */
export function eyepiece({ state, steps, settings, compensators, changed }) {
  const stages = EYES.map((eye) => stageOf(eye, { state, steps, compensator: compensators[eye] }));
  /** @type {Eye|null} */
  let eye = null;
  /** @type {Report|null} */
  let report = null;

  const name = el("h2", { id: "eyepiece-name", tabindex: -1 });
  const other = button("", () => open(eye ? opposite(eye) : "right"), { id: "eyepiece-other" });
  const hand = button("", turn, { id: "eyepiece-hand" });
  const shut = button(say("page.eyepiece.close"), close, { id: "eyepiece-close" });
  const node = el(
    "section",
    { class: "eyepiece card", hidden: true, "aria-labelledby": "eyepiece-name" },
    name,
    el("div", { class: "eyepiece-bar" }, other, hand, shut),
    ...stages.map((stage) => stage.node),
  );
  // A touch on the dial leaves the focus nowhere, so the whole page is listened to.
  document.addEventListener("keydown", (event) => {
    if (event.key === "Escape" && !node.closest("[hidden]")) close();
  });

  /** The keys change sides: whoever holds the tablet in the other hand reaches them with that thumb. */
  function turn() {
    settings.hand = settings.hand === "left" ? "right" : "left";
    saveSettings(settings);
    draw();
  }

  function draw() {
    node.dataset["hand"] = settings.hand;
    hand.textContent = say(`page.eyepiece.keys_${opposite(settings.hand)}`);
    for (const stage of stages) {
      stage.node.hidden = stage.eye !== eye;
      if (stage.eye === eye) stage.draw(report);
    }
    if (!eye) return;
    name.textContent = say(`page.lenses.${eye}`);
    other.textContent = say(`page.lenses.${opposite(eye)}`);
  }

  /** @param {Eye} wanted */
  function open(wanted) {
    for (const stage of stages) (stage.eye === wanted ? stage.borrow : stage.giveBack)();
    eye = wanted;
    node.hidden = false;
    changed(true);
    draw();
    name.focus({ preventScroll: true });
    window.scrollTo(0, 0);
  }

  function close() {
    const from = eye;
    if (!from) return;
    for (const stage of stages) stage.giveBack();
    eye = null;
    node.hidden = true;
    changed(false);
    document.getElementById(`eyepiece-${from}`)?.focus();
  }

  return {
    node,
    open,
    close,
    /** @param {Report|null} next */
    show(next) {
      report = next;
      draw();
    },
  };
}
