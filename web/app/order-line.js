/** The one-line entry: what was understood is shown in full before "Take it" puts it into the fields. */

import { button, el, redraw } from "./dom.js";
import { faultText } from "./faults.js";
import { fromJob, removeBranch } from "./job.js";
import { say, shown } from "./words.js";

/** @param {any} answer what was understood with its notes, or what is asked back */
function linesOf(answer) {
  if (answer.errors) return answer.errors.map((/** @type {any} */ fault) => el("li", { class: "wrong" }, faultText(fault)));
  return [
    ...(answer.echo ?? []).map((/** @type {string} */ line) => el("li", { class: "understood" }, shown(line))),
    ...(answer.notes ?? []).map((/** @type {any} */ note) =>
      el("li", { class: "ask" }, say(`notes.${note.code}`, note.params)),
    ),
  ];
}

/**
 * @param {object} tools
 * @param {import("./types.js").Engine} tools.engine
 * @param {import("./state.js").State} tools.state
 * @param {import("./settings.js").Settings} tools.settings
 */
export function orderLine({ engine, state, settings }) {
  /** @type {any} */
  let understood = null;
  let asked = "";

  const input = el("input", {
    id: "f-line",
    type: "text",
    "data-path": "line",
    "data-kind": "line",
    autocomplete: "off",
    autocapitalize: "off",
    spellcheck: "false",
    maxlength: 400,
    "aria-describedby": "line-echo",
    oninput: () => state.set("line", input.value),
  });
  const echo = el("div", { id: "line-echo", class: "line-echo" });
  const take = button(say("page.line.take"), takeIt, { class: "primary", id: "take-it", disabled: true });

  /** @param {any} answer */
  function show(answer) {
    const refused = Boolean(answer?.errors);
    understood = refused ? null : answer;
    take.disabled = !understood;
    if (refused) input.setAttribute("aria-invalid", "true");
    else input.removeAttribute("aria-invalid");
    const lines = answer ? linesOf(answer) : [];
    const title = say(refused ? "page.line.asks" : "page.line.understood");
    redraw(echo, ...(lines.length ? [el("p", { class: "echo-title" }, title), el("ul", {}, ...lines)] : []));
  }

  async function ask() {
    const line = (state.entries["line"] ?? "").trim();
    const question = `${settings.bases} ${line}`;
    if (question === asked) return;
    asked = question;
    if (!line) {
      show(null);
      return;
    }
    take.disabled = true;
    const answer = await engine.ask({ do: "read-order", line, bases: settings.bases }, { lane: "line" });
    if (answer && asked === question) show(answer);
  }

  function takeIt() {
    const order = understood;
    if (!order) return;
    state.change((draft) => {
      for (const eye of ["right", "left"]) {
        if (!order[eye]) continue;
        for (const name of ["sphere", "cylinder", "axis", "add", "prism"]) removeBranch(draft, `${eye}.${name}`);
        delete draft[`page.way.${eye}.prism`];
      }
      const { right, left, pd_mm } = order;
      Object.assign(draft, fromJob({ right, left, pd_mm }));
      delete draft["line"];
    });
    document.getElementById("order-check")?.scrollIntoView({ block: "nearest" });
  }

  state.subscribe((entries) => {
    const line = entries["line"] ?? "";
    if (input.value !== line) input.value = line;
    ask();
  });

  const node = el(
    "div",
    { class: "field order-line" },
    el("label", { for: "f-line" }, say("page.labels.line")),
    el("div", { class: "beside" }, input, take),
    el("p", { class: "example" }, say("page.line.example")),
    echo,
  );
  return { node, ask };
}
