/** The frame round the views: which job, which move, undo, the keypad, whether it is saved. */

import { button, byId, el } from "./dom.js";
import { saveSettings, wantsKeypad } from "./settings.js";
import { svg } from "./dom.js";
import { startStatus } from "./start-words.js";
import { say } from "./words.js";

const MOVES = ["order", "layout", "read", "decide", "keep", "bench"];

/** @param {string} path */
function icon(path) {
  return svg(
    "svg",
    { class: "icon", viewBox: "0 0 24 24", "aria-hidden": "true", focusable: "false" },
    svg("path", { d: path }),
  );
}

/**
 * @param {object} tools
 * @param {import("./state.js").State} tools.state
 * @param {Record<string, {node: HTMLElement}>} tools.views
 * @param {import("./settings.js").Settings} tools.settings
 * @param {() => void} tools.toggleKeypad
 * @param {(name: string) => void} tools.drawView
 */
export function frame({ state, views, settings, toggleKeypad, drawView }) {
  const job = el("p", { class: "job" });
  const save = el("p", { class: "save" });
  const starting = el("p", { class: "engine" });
  const undo = button(
    "",
    () => state.undo(),
    { class: "tool", "aria-label": say("page.actions.undo"), id: "undo", "data-repeats": true },
    icon("M9 7 L4 12 L9 17 M4 12 H14 a5 5 0 0 1 0 10 H11"),
  );
  const redo = button(
    "",
    () => state.redo(),
    { class: "tool", "aria-label": say("page.actions.redo"), id: "redo", "data-repeats": true },
    icon("M15 7 L20 12 L15 17 M20 12 H10 a5 5 0 0 0 0 10 H13"),
  );
  const pad = button(
    "",
    toggleKeypad,
    {
      class: "tool",
      "aria-label": say("page.actions.keypad"),
      id: "keypad-toggle",
      "aria-pressed": "false",
      "data-repeats": true,
    },
    icon(
      "M5 5h3v3h-3z M10.5 5h3v3h-3z M16 5h3v3h-3z M5 10.5h3v3h-3z M10.5 10.5h3v3h-3z M16 10.5h3v3h-3z M5 16h3v3h-3z M10.5 16h3v3h-3z M16 16h3v3h-3z",
    ),
  );
  const tabs = MOVES.map((name) =>
    button(say(`page.nav.${name}`), () => show(name), { class: "move", id: `move-${name}`, "data-repeats": true }),
  );

  let anew = false;

  byId("dock").setAttribute("aria-label", say("page.frame.dock"));
  byId("top").append(
    el("h1", { class: "brand" }, "Wedgewright"),
    el("div", { class: "standing" }, job, el("div", { class: "statuses" }, save, starting)),
    el("nav", { "aria-label": say("page.nav.label") }, ...tabs),
    el("div", { class: "tools" }, undo, redo, pad),
  );
  const main = byId("views");
  for (const [name, view] of Object.entries(views)) {
    view.node.id = `view-${name}`;
    main.append(view.node);
  }

  /** Nothing typed may be lost by it: where this window cannot save, the page stays as it is. */
  function openWhenSaved() {
    if (["saved", "recovered"].includes(save.dataset["status"] ?? "")) location.reload();
  }

  /** @param {string} name @param {string} [target] id of what is wanted in it */
  function show(name, target) {
    const wanted = name in views ? name : "order";
    for (const [other, view] of Object.entries(views)) view.node.hidden = other !== wanted;
    tabs.forEach((tab, index) => {
      if (MOVES[index] === wanted) tab.setAttribute("aria-current", "page");
      else tab.removeAttribute("aria-current");
    });
    document.documentElement.dataset["view"] = wanted;
    if (settings.view !== wanted) {
      settings.view = wanted;
      saveSettings(settings);
    }
    drawView(wanted);
    if (!target) {
      window.scrollTo(0, 0);
      return;
    }
    const place = byId(target);
    place.scrollIntoView({ block: "center" });
    place.focus({ preventScroll: true });
  }

  return {
    show,
    keypad: () => pad.setAttribute("aria-pressed", String(wantsKeypad(settings))),
    /** @param {number} count warnings of the order check, shown where one may be in another move */
    queries(count) {
      const order = tabs[0];
      if (order) order.textContent = count ? say("page.nav.order_queries", { count }) : say("page.nav.order");
    },
    /** @param {string} code @param {import("./engine.js").Start} start */
    engine(code, start) {
      // While it starts, the strip says so; here stands only what lasts.
      starting.textContent = startStatus(code, start);
    },
    /** Whether something typed is still on its way into the store. */
    get saving() {
      return save.dataset["status"] === "saving";
    },
    /** @param {import("./keeping.js").SaveStatus} status */
    saved(status) {
      save.textContent = say(`page.saving.${status}`);
      save.dataset["status"] = status;
      if (anew) openWhenSaved();
    },
    /** Opens the page anew, since another language was chosen. */
    openAnew() {
      anew = true;
      openWhenSaved();
    },
    draw() {
      const { entries } = state;
      const parts = [
        entries["id"] ?? "",
        entries["state"] ? say(`page.values.state.${entries["state"]}`) : "",
        entries["lens.design"] ? say(`page.values.design.${entries["lens.design"]}`) : "",
      ];
      job.textContent = parts.filter(Boolean).join(" · ") || say("page.frame.no_job");
      undo.disabled = !state.canUndo;
      redo.disabled = !state.canRedo;
      pad.setAttribute("aria-pressed", String(wantsKeypad(settings)));
    },
  };
}
