/** Starts Pyodide out of payloads, with no network: the only file that knows how Pyodide is started. */
import { bytesOf, inflated, readAll } from "./unpack.js";
import { addFresh } from "./memory.js";

/**
 * @typedef {(fetch: Function, WebAssembly: object, exports: object) => (options: object) => Promise<any>} PyodideBehind
 * Pyodide's scripts, seeing these instead of the real ones; gives loadPyodide.
 */
/** @typedef {(request: string) => string} Handle the core's door */

/** The canvas's functions, of which the program wants an address each, and which nothing here calls. */
const GRAPHICS = /^(emscripten_)?gl[A-Z]/;
const NOWHERE = "https://offline.invalid/";

/**
 * The table of functions' addresses that the program is given, where those for drawing stay empty: making them takes as
 * long as all the others together.
 *
 * @param {Record<string, unknown>} addresses
 */
function withoutGraphics(addresses) {
  const none = new WebAssembly.Global({ value: "i32", mutable: true }, 0);
  return new Proxy(addresses, {
    get: (all, name) => (GRAPHICS.test(String(name)) ? none : Reflect.get(all, name)),
  });
}

/**
 * Pyodide's loadPyodide, for which there is a program, a library and nothing else in the world.
 *
 * @param {PyodideBehind} pyodideBehind
 * @param {object} world
 * @param {Promise<WebAssembly.Module>} world.program
 * @param {Uint8Array<ArrayBuffer>} world.library a zip; empty where a snapshot holds all that is imported
 * @param {(memory: WebAssembly.Memory) => Promise<void>} [world.fresh] sees the memory before the program has run
 * @returns {(options: object) => Promise<any>}
 */
export function offlinePyodide(pyodideBehind, { program, library, fresh = async () => {} }) {
  // Where the program cannot be made, Pyodide waits for ever; so it is said here.
  /** @type {(error: unknown) => void} */
  let fail = () => {};
  const failed = new Promise((_, reject) => (fail = reject));
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
  const instantiate = async (/** @type {any} */ imports) => {
    try {
      const module = await program;
      const instance = await WebAssembly.instantiate(module, { ...imports, "GOT.func": withoutGraphics(imports["GOT.func"]) });
      await fresh(imports.env.memory);
      return { module, instance };
    } catch (error) {
      fail(error);
      throw error;
    }
  };
  // The same functions as the real WebAssembly, but the runtime's module is the one compiled already.
  const offlineAssembly = Object.create(WebAssembly, {
    instantiateStreaming: { value: (/** @type {unknown} */ _response, /** @type {unknown} */ imports) => instantiate(imports) },
  });
  // The scripts try for `exports`; where there is none that costs more time than one would think.
  const loadPyodide = pyodideBehind(offlineFetch, offlineAssembly, {});
  return (options) =>
    Promise.race([
      failed,
      loadPyodide({
        indexURL: NOWHERE,
        packageBaseUrl: NOWHERE,
        stdLibURL: `${NOWHERE}python_stdlib.zip`,
        lockFileContents: { info: PYODIDE_LOCK_INFO, packages: {} },
        env: { HOME: "/home/pyodide", LANG: "C.UTF-8", PYTHONHASHSEED: "0" },
        stdin: () => null,
        ...options,
      }),
    ]);
}

/**
 * The program, compiled while its bytes are still being inflated.
 *
 * @param {string} text its payload
 * @returns {Promise<WebAssembly.Module>}
 */
export async function compiled(text) {
  const headers = { "Content-Type": "application/wasm" };
  const program = await WebAssembly.compileStreaming(new Response(inflated(bytesOf(text)), { headers }));
  performance.mark("program-compiled");
  return program;
}

/**
 * The core's door, out of the memory that the build has kept: everything imported, the first calls made.
 *
 * @param {PyodideBehind} pyodideBehind
 * @param {Promise<WebAssembly.Module>} program
 * @param {string} snapshot payload
 * @returns {Promise<Handle>}
 */
export async function startFromSnapshot(pyodideBehind, program, snapshot) {
  const kept = readAll(inflated(bytesOf(snapshot)));
  kept.then(() => performance.mark("memory-inflated"));
  const load = offlinePyodide(pyodideBehind, {
    program,
    library: new Uint8Array(),
    fresh: async (memory) => {
      performance.mark("program-instantiated");
      addFresh(await kept, memory);
      performance.mark("memory-whole");
    },
  });
  performance.mark("scripts-run");
  const pyodide = await load({ _loadSnapshot: kept });
  performance.mark("pyodide-loaded");
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
 * @param {Promise<WebAssembly.Module>} program
 * @param {string} python payload: the zip with library and core
 * @returns {Promise<Handle>}
 */
export async function startFromLibrary(pyodideBehind, program, python) {
  const library = await readAll(inflated(bytesOf(python)));
  const pyodide = await offlinePyodide(pyodideBehind, { program, library })({});
  performance.mark("pyodide-loaded");
  // What is loaded now stays; looking it over again and again would only make the start and some keystrokes late.
  const collector = pyodide.pyimport("gc");
  collector.disable();
  const { handle } = pyodide.pyimport("pycore.api");
  collector.freeze();
  collector.enable();
  collector.set_threshold(50_000, 50, 100);
  return handle;
}
