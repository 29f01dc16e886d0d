/** Opens the engine: in a worker or on this thread, from the kept memory or from the library's byte code. */
import { bytesOf, inflatedInPieces, markOf } from "../worker/unpack.js";
import { payload, scriptUrl } from "./boot.js";

/** @typedef {"worker" | "main-thread"} Mode */
/** @typedef {"snapshot" | "python"} Source what it starts from: the memory the build has kept, or the library */
/** @typedef {{postMessage: (message: object, transfer?: Transferable[]) => void, end: () => void}} Link */
/** @typedef {{message: (data: any) => void, crash: (error: unknown) => void}} Listener */

/**
 * A worker made of the engine's own text, or, where workers are refused, the engine on this thread.
 *
 * @param {(port: any) => void} engine
 * @param {Listener} listener
 * @returns {{link: Link, mode: Mode}}
 */
function linkTo(engine, listener) {
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
    return { link: { postMessage: (message, transfer = []) => worker.postMessage(message, transfer), end }, mode: "worker" };
  } catch {
    const { port1, port2 } = new MessageChannel();
    port1.onmessage = ({ data }) => listener.message(data);
    engine(port2);
    const end = () => {
      port1.onmessage = null;
      port1.close();
    };
    return { link: { postMessage: (message, transfer = []) => port1.postMessage(message, transfer), end }, mode: "main-thread" };
  }
}

/**
 * The memory kept by the build, inflated here while the worker is busy with the program; refused beside another program,
 * as a folder has it that was copied in part.
 *
 * @param {Promise<string>} wasm
 */
async function keptMemory(wasm) {
  const text = await payload("snapshot");
  const kept = await inflatedInPieces(bytesOf(text));
  if (markOf(text) !== markOf(await wasm)) {
    throw new Error("The kept memory is not of this program.");
  }
  return kept;
}

/**
 * @param {Source} source
 * @param {Listener} listener
 * @returns {Promise<{link: Link, mode: Mode, given: Promise<unknown>}>} the link, and when the engine has all it starts from
 */
export async function openLink(source, listener) {
  // Read side by side, the one that is needed first begun first.
  const engine = payload("worker");
  const program = payload("wasm");
  const start = source === "snapshot" ? keptMemory(program) : payload("python");
  for (const read of [start, program]) {
    read.catch(() => {}); // said where it is awaited, below
  }
  const { link, mode } = linkTo(await engine, listener);
  const given = Promise.all([
    program.then((body) => link.postMessage({ kind: "wasm", body })),
    start.then((body) => link.postMessage({ kind: source, body }, body.buffer ? [body.buffer] : [])),
  ]);
  return { link, mode, given };
}
