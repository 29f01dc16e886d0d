/** Bundled in place of main.js where the snapshot is made: the same Pyodide, started the same way. */
import { takeFresh } from "./memory.js";
import { offlinePyodide } from "./python.js";

/**
 * Fills the memory that Python has given back with zeros, so that the snapshot packs well: takes piece after piece, the
 * largest first, until there is none of that size, and gives all back.
 *
 * @param {any} runtime Emscripten's module
 */
function clearFreeMemory(runtime) {
  const taken = [];
  for (let size = 1 << 20; size >= 8; size = size > 512 ? size / 2 : size - 8) {
    const end = runtime._sbrk(0);
    while (runtime._sbrk(0) === end) {
      const at = runtime._PyMem_RawMalloc(size);
      runtime.HEAPU8.fill(0, at, at + runtime._malloc_usable_size(at));
      taken.push(at);
    }
  }
  for (const at of taken) {
    runtime._PyMem_RawFree(at);
  }
  runtime._malloc_trim(0);
  runtime.HEAPU8.fill(0, runtime._sbrk(0));
}

/**
 * @param {{program: Uint8Array<ArrayBuffer>, library: Uint8Array<ArrayBuffer>, warm: string}} given
 * @param {import("./python.js").PyodideBehind} pyodideBehind
 * @returns {Promise<Uint8Array>}
 */
export async function serve({ program, library, warm }, pyodideBehind) {
  let untouched = new Uint32Array();
  const fresh = (/** @type {WebAssembly.Memory} */ memory) => {
    untouched = new Uint32Array(memory.buffer.slice(0));
  };
  const load = offlinePyodide(pyodideBehind, WebAssembly.compile(program));
  const pyodide = await load({ modules: library, fresh }, { _makeSnapshot: true });
  pyodide.runPython(warm);
  clearFreeMemory(pyodide._module);
  const snapshot = pyodide.makeMemorySnapshot();
  takeFresh(snapshot, untouched);
  return snapshot;
}
