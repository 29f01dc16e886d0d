/**
 * The page's side of the conversation with the core: one request at a time goes to the worker, the newest of each lane
 * wins, what nobody waits for goes when it is quiet, and a worker that fails or takes too long is ended and started anew.
 */
import { afterFirstPaint, payload, scriptUrl } from "./boot.js";
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
/** @typedef {{postMessage: (message: object) => void, end: () => void}} Link */
/** @typedef {{message: (data: any) => void, crash: (error: unknown) => void}} Listener */

const TIME_LIMIT_MS = 20000;
const START_LIMIT_MS = 120000;
/** Long enough after the last question that somebody waited for: typing pauses less. */
const QUIET_MS = 400;

/**
 * Opens a worker made of the engine's own text, or, where workers are refused, runs the engine on this thread.
 *
 * @param {(port: any) => void} engine
 * @param {Listener} listener
 * @returns {{link: Link, mode: "worker" | "main-thread"}}
 */
function openLink(engine, listener) {
  try {
    const url = URL.createObjectURL(new Blob([`(${engine})(self);`], { type: "text/javascript" }));
    const worker = new Worker(scriptUrl(url));
    worker.onmessage = ({ data }) => listener.message(data);
    worker.onerror = (event) => listener.crash(event.message);
    const end = () => {
      worker.onmessage = worker.onerror = null;
      worker.terminate();
      URL.revokeObjectURL(url);
    };
    return { link: { postMessage: (message) => worker.postMessage(message), end }, mode: "worker" };
  } catch {
    const { port1, port2 } = new MessageChannel();
    port1.onmessage = ({ data }) => listener.message(data);
    engine(port2);
    return { link: { postMessage: (message) => port1.postMessage(message), end: () => port1.close() }, mode: "main-thread" };
  }
}

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

/**
 * @param {{onState?: (state: EngineState) => void, language?: string, timeLimitMs?: number, quietMs?: number}} [options]
 * `language` in which the core answers
 */
export function startEngine({ onState = () => {}, language = "en", timeLimitMs = TIME_LIMIT_MS, quietMs = QUIET_MS } = {}) {
  /** @type {EngineState} */
  let state = "reading";
  /** @type {"worker" | "main-thread"} */
  let mode = "worker";
  /** @type {Map<string, Waiting>} one place a lane; the oldest goes first */
  const waiting = new Map();
  /** @type {Waiting | null} */
  let running = null;
  /** @type {Link | null} */
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

  // The question that was being answered is asked once more of the new worker, unless a newer one has come.
  const crashed = () => {
    closeLink();
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
      for (const sections of [[], ...NAMES.map((name) => [name])]) {
        await ask({ do: "report", job: demonstration.job, sections, scenes: true }, background);
      }
    }
  };

  const open = async () => {
    try {
      // Read side by side, the one that is needed first begun first.
      const [engine, wasm, python] = [payload("worker"), payload("wasm"), payload("python")];
      for (const read of [wasm, python]) {
        read.catch(() => {}); // said where it is awaited, below
      }
      const opened = openLink(await engine, listener);
      link = opened.link;
      mode = opened.mode;
      timer = setTimeout(crashed, START_LIMIT_MS);
      const current = link;
      current.postMessage({ kind: "wasm", text: await wasm });
      current.postMessage({ kind: "python", text: await python });
      if (state === "reading") {
        enter("starting");
      }
    } catch {
      closeLink();
      giveUp();
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
    get mode() {
      return mode;
    },
  };
}
