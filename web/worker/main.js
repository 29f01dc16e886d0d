/**
 * The engine's side of the conversation with the page. It runs in a worker, or on the page's own thread where workers are
 * refused; it knows a port to listen at and nothing of the page.
 *
 * From the page: {kind: "wasm", body} and one of {kind: "snapshot" | "python", body}, then {kind: "ask", id, text}.
 * To the page: {kind: "ready", times}, {kind: "answer", id, text}, {kind: "failed", message}.
 */
import { compiled, offlinePyodide, startFromLibrary, startFromSnapshot } from "./python.js";

/**
 * @typedef {{onmessage: ((event: MessageEvent) => void) | null, postMessage: (message: object) => void}} Port
 */

/** When each part of the start was done, by the clock that all threads share. @returns {Record<string, number>} */
function times() {
  const marks = [...performance.getEntriesByType("mark"), { name: "core-ready", startTime: performance.now() }];
  return Object.fromEntries(marks.map(({ name, startTime }) => [name, performance.timeOrigin + startTime]));
}

/**
 * @param {Port} port
 * @param {import("./python.js").PyodideBehind} pyodideBehind
 */
export function serve(port, pyodideBehind) {
  /** @type {Record<string, (body: any) => void>} */
  const arrived = {};
  /** @type {(kind: string) => Promise<any>} */
  const payload = (kind) => new Promise((resolve) => (arrived[kind] = resolve));
  const program = payload("wasm").then(compiled);
  program.catch(() => {}); // reported where it is awaited
  const load = Promise.resolve().then(() => offlinePyodide(pyodideBehind, program));
  // Whichever of the two comes says which way to start.
  const handle = Promise.race([
    payload("snapshot").then(async (kept) => startFromSnapshot(await load, kept)),
    payload("python").then(async (text) => startFromLibrary(await load, text)),
  ]);
  handle.then(
    () => port.postMessage({ kind: "ready", times: times() }),
    (error) => port.postMessage({ kind: "failed", message: String(error) }),
  );
  port.onmessage = async ({ data }) => {
    const take = arrived[data.kind];
    if (take) {
      take(data.body);
      return;
    }
    try {
      const answer = (await handle)(data.text);
      port.postMessage({ kind: "answer", id: data.id, text: answer });
    } catch (error) {
      // `handle` of the core never raises: what comes here is a fault of the runtime itself, after which it is not used again.
      port.postMessage({ kind: "failed", message: String(error) });
    }
  };
}
