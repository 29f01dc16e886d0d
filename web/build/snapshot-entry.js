/** Bundled in place of worker/main.js where the snapshot is made: the same Pyodide, started the same way. */
import { offlinePyodide } from "../worker/python.js";

/**
 * @param {{program: Uint8Array<ArrayBuffer>, library: Uint8Array<ArrayBuffer>, warm: string}} given
 * @param {import("../worker/python.js").PyodideBehind} pyodideBehind
 * @returns {Promise<Uint8Array>}
 */
export async function serve({ program, library, warm }, pyodideBehind) {
  const pyodide = await offlinePyodide(pyodideBehind, WebAssembly.compile(program), library)({ _makeSnapshot: true });
  pyodide.runPython(warm);
  return pyodide.makeMemorySnapshot();
}
