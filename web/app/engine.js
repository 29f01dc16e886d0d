/**
 * The page's side of the conversation with the core: one request at a time goes to the worker, the newest of each lane
 * wins, what nobody waits for goes when it is quiet, and a worker that fails or takes too long is ended and started anew.
 */
import { afterFirstPaint } from "./boot.js";
import { openLink } from "./link.js";
import { NAMES } from "./section-names.js";

/** @typedef {"reading" | "starting" | "ready" | "restarted" | "failed"} EngineState */
/** @typedef {{do: string, [key: string]: unknown}} EngineRequest the request without `format` and `sequence` */
/** @typedef {{format: string, sequence?: number, [key: string]: any}} EngineAnswer */
/**
 * @typedef {object} Waiting
 * @property {number} id
 * @property {string} lane
 * @property {string} text
 * @property {boolean} idle nobody waits for it: it goes when nothing else was asked for a while
 * @property {(answer: EngineAnswer | null) => void} resolve
 */
/**
 * How the engine was started: in a worker or not, from the kept memory or from the library, and if from the library, why.
 * @typedef {{mode: import("./link.js").Mode, source: import("./link.js").Source, why: "" | "asked" | "failed" | "slow"}} Start
 */

const TIME_LIMIT_MS = 20000;
/** The kept memory is given up sooner, since there is another way. */
const START_LIMITS_MS = { snapshot: 30000, python: 120000 };
/** Long enough after the last question that somebody waited for: typing pauses less. */
const QUIET_MS = 400;
/** By then the browser has compiled what a keystroke runs through; a call takes half the time of the first ones. */
const WARM_CALLS = 40;

/**
 * The answer where the engine itself has none to give: the same shape as the core's refusals, words by code.
 *
 * @param {string} code
 * @returns {EngineAnswer}
 */
function refusal(code) {
  const error = { code, field: "", given: "", params: {}, fix: "retry" };
  return { format: "wedgewright.refusal/1", errors: [error] };
}

/** The engine's own times, by the page's clock, for whoever measures. @param {Record<string, number>} times */
function markTimes(times) {
  for (const [name, at] of Object.entries(times)) {
    performance.mark(`engine-${name}`, { startTime: Math.max(0, at - performance.timeOrigin) });
  }
}

/** For measuring and for looking into a fault: the address ending in `#library` starts without the kept memory. */
const libraryAsked = () => globalThis.location?.hash === "#library";

/**
 * @param {{onState?: (state: EngineState) => void, language?: string, timeLimitMs?: number, quietMs?: number, startLimitsMs?: Record<string, number>}} [options]
 * `language` in which the core answers
 */
export function startEngine({
  onState = () => {},
  language = "en",
  timeLimitMs = TIME_LIMIT_MS,
  quietMs = QUIET_MS,
  startLimitsMs = START_LIMITS_MS,
} = {}) {
  /** @type {EngineState} */
  let state = "reading";
  /** @type {Start} */
  const start = libraryAsked()
    ? { mode: "worker", source: "python", why: "asked" }
    : { mode: "worker", source: "snapshot", why: "" };
  /** @type {Map<string, Waiting>} one place a lane; the oldest goes first */
  const waiting = new Map();
  /** @type {Waiting | null} */
  let running = null;
  /** @type {import("./link.js").Link | null} */
  let link = null;
  /** @type {ReturnType<typeof setTimeout> | undefined} */
  let timer;
  /** @type {ReturnType<typeof setTimeout> | undefined} */
  let quietTimer;
  let quiet = false;
  let ready = false;
  let crashes = 0;
  let sequence = 0;

  const enter = (/** @type {EngineState} */ next) => {
    state = next;
    onState(next);
  };

  const somebodyAsks = () => {
    clearTimeout(quietTimer);
    quiet = false;
    quietTimer = setTimeout(() => {
      quiet = true;
      sendNext();
    }, quietMs);
  };

  const sendNext = () => {
    const next = [...waiting.values()].find(({ idle }) => !idle || quiet);
    if (!ready || running || !link || !next) {
      return;
    }
    waiting.delete(next.lane);
    running = next;
    timer = setTimeout(overTime, timeLimitMs);
    link.postMessage({ kind: "ask", id: next.id, text: next.text });
  };

  const settle = (/** @type {EngineAnswer} */ answer) => {
    clearTimeout(timer);
    running?.resolve(answer);
    running = null;
  };

  const giveUp = () => {
    enter("failed");
    settle(refusal("engine-failed"));
    for (const entry of waiting.values()) {
      entry.resolve(refusal("engine-failed"));
    }
    waiting.clear();
  };

  const closeLink = () => {
    clearTimeout(timer);
    ready = false;
    link?.end();
    link = null;
  };

  const leaveSnapshot = (/** @type {"failed" | "slow"} */ why) => {
    if (start.source === "snapshot") {
      start.source = "python";
      start.why = why;
    }
  };

  const openFromLibrary = (/** @type {"failed" | "slow"} */ why) => {
    closeLink();
    leaveSnapshot(why);
    open();
  };

  // The question that was being answered is asked once more of the new worker, unless a newer one has come.
  const crashed = () => {
    if (start.source === "snapshot" && !ready) {
      openFromLibrary("failed");
      return;
    }
    closeLink();
    leaveSnapshot("failed");
    crashes += 1;
    if (crashes > 1) {
      giveUp();
      return;
    }
    if (running && !waiting.has(running.lane)) {
      waiting.set(running.lane, running);
    } else {
      running?.resolve(null);
    }
    running = null;
    enter("restarted");
    open();
  };

  const startOverTime = () => (start.source === "snapshot" ? openFromLibrary("slow") : crashed());

  const overTime = () => {
    closeLink();
    settle(refusal("engine-time-limit"));
    enter("restarted");
    open();
  };

  const listener = {
    message: (/** @type {any} */ data) => {
      if (data.kind === "ready") {
        clearTimeout(timer);
        ready = true;
        markTimes(data.times ?? {});
        enter("ready");
        somebodyAsks();
        warmUp();
        sendNext();
      } else if (data.kind === "answer" && data.id === running?.id) {
        if (!running?.idle) {
          somebodyAsks();
        }
        settle(JSON.parse(data.text));
        sendNext();
      } else if (data.kind === "failed") {
        crashed();
      }
    },
    crash: crashed,
  };

  // The first calls of a fresh Python are slow, and each section's code is loaded when it is first asked for: while it
  // is quiet that is done with the demonstration, one by one, so that a question waits behind one of them at most.
  const warmUp = async () => {
    const background = { lane: "warm-up", idle: true };
    const demonstration = await ask({ do: "demonstration" }, background);
    if (demonstration?.job) {
      const calls = [...Array(WARM_CALLS).fill([]), ...NAMES.map((name) => [name])];
      for (const sections of calls) {
        await ask({ do: "report", job: demonstration.job, sections, scenes: true }, background);
      }
    }
  };

  const open = async () => {
    const { source } = start;
    try {
      const opened = await openLink(source, listener);
      link = opened.link;
      start.mode = opened.mode;
      timer = setTimeout(startOverTime, startLimitsMs[source]);
      await opened.given;
      if (state === "reading") {
        enter("starting");
      }
    } catch {
      if (source !== start.source) {
        return; // given up already
      }
      if (source === "snapshot") {
        openFromLibrary("failed");
      } else {
        closeLink();
        giveUp();
      }
    }
  };

  /**
   * Asks the core. A newer question of the same lane makes an older one that has no answer yet resolve to null.
   *
   * @param {EngineRequest} request
   * @param {{lane: string, idle?: boolean}} how `idle` where nobody waits for the answer
   * @returns {Promise<EngineAnswer | null>}
   */
  function ask(request, { lane, idle = false }) {
    return new Promise((resolve) => {
      if (state === "failed") {
        resolve(refusal("engine-failed"));
        return;
      }
      sequence += 1;
      waiting.get(lane)?.resolve(null);
      if (running?.lane === lane) {
        running.resolve(null);
      }
      const text = JSON.stringify({ format: "wedgewright.request/1", sequence, language, ...request });
      waiting.delete(lane); // so that the newer one takes its place at the end of the queue
      waiting.set(lane, { id: sequence, lane, text, idle, resolve });
      if (!idle) {
        somebodyAsks();
      }
      sendNext();
    });
  }

  /** @param {string} lane whose question is given up unless it is being answered already */
  function cancel(lane) {
    waiting.get(lane)?.resolve(null);
    waiting.delete(lane);
  }

  onState(state);
  afterFirstPaint().then(open);

  return {
    ask,
    cancel,
    get state() {
      return state;
    },
    get start() {
      return start;
    },
  };
}
