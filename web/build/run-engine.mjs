/** Starts the engine of a built folder under Node, which is dressed as a browser's worker for it. */
import { readFileSync } from "node:fs";
import { join } from "node:path";
import { runInThisContext } from "node:vm";
import { bytesOf, inflatedInPieces } from "../worker/unpack.js";
import { dressAsWorker } from "./dress.mjs";

/** A script as a browser reads it, by its first bytes. @param {string} file */
const scriptText = (file) => new TextDecoder(readFileSync(file)[0] === 0xff ? "utf-16le" : "utf-8").decode(readFileSync(file));

/**
 * @param {string} folder the built folder
 * @param {"snapshot" | "python"} source what it starts from
 * @returns {Promise<{ask: (request: object) => Promise<any>, exit: (code: number) => void}>}
 */
export async function startBuiltEngine(folder, source) {
  for (const name of ["worker", "wasm", source]) {
    runInThisContext(scriptText(join(folder, "engine", `${name}.js`)), { filename: `${name}.js` });
  }
  const exit = dressAsWorker();
  const page = /** @type {any} */ (globalThis);

  /** @type {Map<number, (text: string) => void>} */
  const answers = new Map();
  /** @type {{onmessage: any, postMessage: (message: any) => void}} */
  const port = { onmessage: null, postMessage: () => {} };
  const ready = new Promise((resolve, reject) => {
    port.postMessage = (message) => {
      if (message.kind === "ready") {
        resolve(undefined);
      } else if (message.kind === "answer") {
        answers.get(message.id)?.(message.text);
      } else {
        reject(new Error(message.message));
      }
    };
  });
  page.wedgewrightEngine(port);
  port.onmessage({ data: { kind: "wasm", body: page.wedgewrightWasm } });
  const body =
    source === "snapshot" ? await inflatedInPieces(bytesOf(page.wedgewrightSnapshot)) : page.wedgewrightPython;
  port.onmessage({ data: { kind: source, body } });
  await ready;

  let id = 0;
  const ask = (/** @type {object} */ request) =>
    new Promise((resolve) => {
      id += 1;
      answers.set(id, (text) => resolve(JSON.parse(text)));
      const text = JSON.stringify({ format: "wedgewright.request/1", sequence: id, ...request });
      port.onmessage({ data: { kind: "ask", id, text } });
    });
  return { ask, exit };
}
