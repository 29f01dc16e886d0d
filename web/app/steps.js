/** Readings by touch and by step keys: the core says where the target then stands. */

import { putPrism } from "./prism-rows.js";
import { toJob } from "./job.js";

/**
 * @param {import("./types.js").Engine} engine
 * @param {import("./state.js").State} state
 * @param {(faults: import("./types.js").Fault[]) => void} refused
 */
export function createSteps(engine, state, refused) {
  // One after the other: the next step starts from where the last one ended.
  let queue = Promise.resolve();

  /** @param {string} eye @param {import("./engine.js").EngineRequest} request */
  async function carryOut(eye, request) {
    const answer = await engine.ask({ ...request, eye, job: toJob(state.entries).job }, { lane: "reading" });
    if (!answer) return;
    if (answer["errors"]) {
      refused(answer["errors"]);
      return;
    }
    state.change((draft) => putPrism(draft, `readings.${eye}.prism`, answer["prism"]));
  }

  /** @param {string} eye @param {import("./engine.js").EngineRequest} request */
  function ask(eye, request) {
    queue = queue.then(() => carryOut(eye, request));
    return queue;
  }

  return {
    /** @param {string} eye @param {{x: string, y: string}} place */
    touch: (eye, place) => ask(eye, { do: "touch", ...place }),
    /** @param {string} eye @param {number} right @param {number} up @param {"step"|"tenth"|"fine"} size */
    step: (eye, right, up, size) => ask(eye, { do: "step", right, up, size }),
  };
}
