/** The invented pairs: one that passes, and one of each main kind that does not, one touch apart. */

import { button, el } from "./dom.js";
import { fromJob, guestJob } from "./job.js";
import { say } from "./words.js";

/**
 * @param {object} tools
 * @param {import("./types.js").Engine} tools.engine
 * @param {import("./state.js").State} tools.state
 * @param {(faults: import("./types.js").Fault[]) => void} tools.refuse
 * @param {() => void} tools.loaded
 * @param {HTMLElement} tools.host where a demonstration says that it is one
 */
export function demonstration({ engine, state, refuse, loaded, host }) {
  const name = el("span");
  let following = "";

  /** @param {string} [pair] by what is wrong with it; without it the one that passes */
  async function load(pair) {
    const given = await engine.ask({ do: "demonstration", ...(pair ? { pair } : {}) }, { lane: "demonstration" });
    if (!given) return;
    if (!given["job"]) {
      refuse(given["errors"] ?? []);
      return;
    }
    following = given["next"];
    name.textContent = ` ${say(`page.demonstration.pairs.${given["pair"]}`)}`;
    state.replace(guestJob(state.entries, fromJob(given["job"])));
    loaded();
  }

  host.append(
    button(
      "",
      () => load(following),
      { class: "demonstration", id: "next-pair" },
      say("page.demonstration.banner"),
      name,
      " ",
      el("u", {}, say("page.demonstration.next")),
    ),
  );
  return {
    load: () => load(),
    draw() {
      host.hidden = state.entries["demonstration"] !== "true";
    },
  };
}
