/** Starts Pyodide out of two payloads, with no network: the only file that knows how Pyodide is started. */
import { bytesOfBase64, inflated } from "./unpack.js";

/**
 * @typedef {(fetch: Function, WebAssembly: object) => (options: object) => Promise<any>} PyodideBehind
 * Pyodide's scripts, seeing these two instead of the real ones; gives loadPyodide.
 */

const NOWHERE = "https://offline.invalid/";
const HOME = "/home/pyodide";

/**
 * @param {PyodideBehind} pyodideBehind
 * @param {Promise<string>} wasm base64 of gzip of pyodide.asm.wasm
 * @param {Promise<string>} python base64 of gzip of the zip with library and core
 * @returns {Promise<(request: string) => string>} the core's handle
 */
export async function startPython(pyodideBehind, wasm, python) {
  // Compiling starts as soon as these bytes are there, while the rest is still being read.
  const compiled = wasm.then((text) =>
    WebAssembly.compileStreaming(
      new Response(inflated(bytesOfBase64(text)), { headers: { "Content-Type": "application/wasm" } }),
    ),
  );
  compiled.catch(() => {}); // reported where it is awaited, below
  const libraryBytes = python.then((text) => new Response(inflated(bytesOfBase64(text))).arrayBuffer());

  // What Pyodide's scripts see under the name `fetch`: the two files it asks for at a start, and nothing else.
  const offlineFetch = async (/** @type {string | URL} */ url) => {
    if (String(url).endsWith("pyodide.asm.wasm")) {
      return new Response(null, { headers: { "Content-Type": "application/wasm" } });
    }
    if (String(url).endsWith("python_stdlib.zip")) {
      return new Response(await libraryBytes);
    }
    throw new TypeError("There is no network here.");
  };
  // The same functions as the real WebAssembly, but the runtime's module is the one compiled above.
  const offlineAssembly = Object.create(WebAssembly, {
    instantiateStreaming: {
      value: async (/** @type {unknown} */ _response, /** @type {WebAssembly.Imports} */ imports) => {
        const module = await compiled;
        return { module, instance: await WebAssembly.instantiate(module, imports) };
      },
    },
  });

  // Reading Pyodide's scripts keeps this thread busy; by waiting here, the program compiles on others meanwhile.
  await wasm;
  const pyodide = await pyodideBehind(offlineFetch, offlineAssembly)({
    indexURL: NOWHERE,
    packageBaseUrl: NOWHERE,
    stdLibURL: `${NOWHERE}python_stdlib.zip`,
    lockFileContents: { info: PYODIDE_LOCK_INFO, packages: {} },
    env: { HOME, PYTHONHASHSEED: "0" },
    stdin: () => null,
  });
  // What is loaded now stays; looking it over again and again would only make the start and some keystrokes late.
  const collector = pyodide.pyimport("gc");
  collector.disable();
  const { handle } = pyodide.pyimport("pycore.api");
  collector.freeze();
  collector.enable();
  collector.set_threshold(50_000, 50, 100);
  return handle;
}
