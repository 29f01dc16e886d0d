/** Starts Pyodide out of payloads, with no network: the only file that knows how Pyodide is started. */
import { bytesOf, inflated, readAll } from "./unpack.js";

/**
 * @typedef {(fetch: Function, WebAssembly: object) => (options: object) => Promise<any>} PyodideBehind
 * Pyodide's scripts, seeing these two instead of the real ones; gives loadPyodide.
 */
/** @typedef {(request: string) => string} Handle the core's door */

const NOWHERE = "https://offline.invalid/";

/**
 * Pyodide's loadPyodide, for which there is a program, a library and nothing else in the world.
 *
 * @param {PyodideBehind} pyodideBehind
 * @param {Promise<WebAssembly.Module>} program
 * @param {Uint8Array<ArrayBuffer>} library a zip; empty where a snapshot holds all that is imported
 * @returns {(options: object) => Promise<any>}
 */
export function offlinePyodide(pyodideBehind, program, library) {
  // What Pyodide's scripts see under the name `fetch`: the two files it asks for at a start, and nothing else.
  const offlineFetch = async (/** @type {string | URL} */ url) => {
    if (String(url).endsWith("pyodide.asm.wasm")) {
      return new Response(null, { headers: { "Content-Type": "application/wasm" } });
    }
    if (String(url).endsWith("python_stdlib.zip")) {
      return new Response(library);
    }
    throw new TypeError("There is no network here.");
  };
  // The same functions as the real WebAssembly, but the runtime's module is the one compiled already.
  const offlineAssembly = Object.create(WebAssembly, {
    instantiateStreaming: {
      value: async (/** @type {unknown} */ _response, /** @type {WebAssembly.Imports} */ imports) => {
        const module = await program;
        return { module, instance: await WebAssembly.instantiate(module, imports) };
      },
    },
  });
  const loadPyodide = pyodideBehind(offlineFetch, offlineAssembly);
  return (options) =>
    loadPyodide({
      indexURL: NOWHERE,
      packageBaseUrl: NOWHERE,
      stdLibURL: `${NOWHERE}python_stdlib.zip`,
      lockFileContents: { info: PYODIDE_LOCK_INFO, packages: {} },
      env: { HOME: "/home/pyodide", LANG: "C.UTF-8", PYTHONHASHSEED: "0" },
      stdin: () => null,
      ...options,
    });
}

/**
 * The program, compiled while its bytes are still being inflated.
 *
 * @param {string} text its payload
 * @returns {Promise<WebAssembly.Module>}
 */
function compiled(text) {
  const headers = { "Content-Type": "application/wasm" };
  return WebAssembly.compileStreaming(new Response(inflated(bytesOf(text)), { headers }));
}

/**
 * The core's door, out of the memory that the build has kept: everything imported, the first calls made.
 *
 * @param {PyodideBehind} pyodideBehind
 * @param {Promise<string>} wasm payload
 * @param {string} snapshot payload
 * @returns {Promise<Handle>}
 */
export async function startFromSnapshot(pyodideBehind, wasm, snapshot) {
  const program = wasm.then(compiled);
  program.catch(() => {}); // reported where it is awaited
  const memory = readAll(inflated(bytesOf(snapshot)));
  memory.catch(() => {});
  const pyodide = await offlinePyodide(pyodideBehind, program, new Uint8Array())({ _loadSnapshot: memory });
  // The build has left this out, because what it sets is not in the memory (see worker.mjs); without it calls are slower.
  pyodide._module.initTrampoline();
  // What the build's own randomness has left must not be the same on every bench.
  pyodide.pyimport("random").seed();
  return pyodide.pyimport("pycore.api").handle;
}

/**
 * The core's door, imported anew from byte code: slower, by documented means alone.
 *
 * @param {PyodideBehind} pyodideBehind
 * @param {Promise<string>} wasm payload
 * @param {string} python payload: the zip with library and core
 * @returns {Promise<Handle>}
 */
export async function startFromLibrary(pyodideBehind, wasm, python) {
  const program = wasm.then(compiled);
  program.catch(() => {}); // reported where it is awaited
  const library = await readAll(inflated(bytesOf(python)));
  const pyodide = await offlinePyodide(pyodideBehind, program, library)({});
  // What is loaded now stays; looking it over again and again would only make the start and some keystrokes late.
  const collector = pyodide.pyimport("gc");
  collector.disable();
  const { handle } = pyodide.pyimport("pycore.api");
  collector.freeze();
  collector.enable();
  collector.set_threshold(50_000, 50, 100);
  return handle;
}
