/** Opens the engine: in a worker or on this thread, from the kept memory or from the library's byte code. */
import { payload, scriptUrl } from "./boot.js";

/** @typedef {"worker" | "main-thread"} Mode */
/** @typedef {"snapshot" | "python"} Source what it starts from: the memory the build has kept, or the library */
/** @typedef {{postMessage: (message: object) => void, end: () => void}} Link */
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
    return { link: { postMessage: (message) => worker.postMessage(message), end }, mode: "worker" };
  } catch {
    const { port1, port2 } = new MessageChannel();
    port1.onmessage = ({ data }) => listener.message(data);
    engine(port2);
    const end = () => {
      port1.onmessage = null;
      port1.close();
    };
    return { link: { postMessage: (message) => port1.postMessage(message), end }, mode: "main-thread" };
  }
}

/**
 * @param {Source} source
 * @param {Listener} listener
 * @returns {Promise<{link: Link, mode: Mode, given: Promise<void>}>} the link, and when the engine has all it starts from
 */
export async function openLink(source, listener) {
  // Read side by side, the one that is needed first begun first.
  const [engine, wasm, memory] = [payload("worker"), payload("wasm"), payload(source)];
  for (const read of [wasm, memory]) {
    read.catch(() => {}); // said where it is awaited, below
  }
  const opened = linkTo(await engine, listener);
  const give = async () => {
    opened.link.postMessage({ kind: "wasm", text: await wasm });
    opened.link.postMessage({ kind: source, text: await memory });
  };
  return { ...opened, given: give() };
}
