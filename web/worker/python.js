/** Starts Pyodide out of payloads, with no network: the only file that knows how Pyodide is started. */
import { bytesOf, inflated, readAll } from "./unpack.js";
import { addFresh } from "./memory.js";

/**
 * @typedef {(fetch: Function, WebAssembly: object, exports: object) => (options: object) => Promise<any>} PyodideBehind
 * Pyodide's scripts, seeing these instead of the real ones; gives loadPyodide.
 */
/** @typedef {(request: string) => string} Handle the core's door */
/**
 * What there is when Pyodide is loaded: the library's zip, if any, and who sees the memory before the program has run.
 * @typedef {{modules?: Uint8Array<ArrayBuffer>, fresh?: (memory: WebAssembly.Memory) => void}} World
 */
/** @typedef {(world: World, options?: object) => Promise<any>} Load */

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
 * Pyodide's loadPyodide, for which there is a program, a library and nothing else in the world. Its scripts are run here
 * and now, so this is best called while the rest is still on its way.
 *
 * @param {PyodideBehind} pyodideBehind
 * @param {Promise<WebAssembly.Module>} program
 * @returns {Load}
 */
export function offlinePyodide(pyodideBehind, program) {
  /** @type {Required<World>} */
  const world = { modules: new Uint8Array(), fresh: () => {} };
  // Where the program cannot be made, Pyodide waits for ever; so it is said here.
  /** @type {(error: unknown) => void} */
  let fail = () => {};
  const failed = new Promise((_, reject) => (fail = reject));
  failed.catch(() => {}); // said by `load`
  // What Pyodide's scripts see under the name `fetch`: the two files it asks for at a start, and nothing else.
  const offlineFetch = async (/** @type {string | URL} */ url) => {
    if (String(url).endsWith("pyodide.asm.wasm")) {
      return new Response(null, { headers: { "Content-Type": "application/wasm" } });
    }
    if (String(url).endsWith("python_stdlib.zip")) {
      return new Response(world.modules);
    }
    throw new TypeError("There is no network here.");
  };
  const instantiate = async (/** @type {any} */ imports) => {
    try {
      const module = await program;
      const instance = await WebAssembly.instantiate(module, { ...imports, "GOT.func": withoutGraphics(imports["GOT.func"]) });
      world.fresh(imports.env.memory);
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
  performance.mark("scripts-run");
  return (given, options = {}) => {
    Object.assign(world, given);
    const loaded = loadPyodide({
      indexURL: NOWHERE,
      packageBaseUrl: NOWHERE,
      stdLibURL: `${NOWHERE}python_stdlib.zip`,
      lockFileContents: { info: PYODIDE_LOCK_INFO, packages: {} },
      env: { HOME: "/home/pyodide", LANG: "C.UTF-8", PYTHONHASHSEED: "0" },
      stdin: () => null,
      ...options,
    });
    return Promise.race([failed, loaded]);
  };
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
 * @param {Load} load
 * @param {Uint8Array<ArrayBuffer>} kept the memory, less what the program has in it when it is new
 * @returns {Promise<Handle>}
 */
export async function startFromSnapshot(load, kept) {
  performance.mark("memory-there");
  const fresh = (/** @type {WebAssembly.Memory} */ memory) => {
    performance.mark("program-instantiated");
    addFresh(kept, memory);
  };
  const pyodide = await load({ fresh }, { _loadSnapshot: kept });
  performance.mark("pyodide-loaded");
  // The build has left this out, because what it sets is not in the memory (see build/scripts.mjs); without it calls are
  // slower.
  pyodide._module.initTrampoline();
  // What the build's own randomness has left must not be the same on every bench.
  pyodide.pyimport("random").seed();
  return pyodide.pyimport("pycore.api").handle;
}

/**
 * The core's door, imported anew from byte code: slower, by documented means alone.
 *
 * @param {Load} load
 * @param {string} python payload: the zip with library and core
 * @returns {Promise<Handle>}
 */
export async function startFromLibrary(load, python) {
  const library = await readAll(inflated(bytesOf(python)));
  const pyodide = await load({ modules: library });
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
