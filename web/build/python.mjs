/**
 * Makes the Python payload: the part of the standard library that is used, and the core, byte-compiled by the very Python
 * that will run them (Pyodide, here under Node), in one stored zip.
 *
 * `pyodide-build` was looked at for this: its newest release for Python 3.11 (0.25.1) belongs to an older Pyodide, and its
 * `py-compile` compiles with the Python it runs on (3.11), whose byte code Python 3.13 refuses.
 */
import { readdir, readFile } from "node:fs/promises";
import { join } from "node:path";
import { pathToFileURL } from "node:url";

/**
 * @param {string} pyodideFolder
 * @param {string} core folder of pycore
 * @returns {Promise<Uint8Array>}
 */
export async function buildPythonZip(pyodideFolder, core) {
  const { loadPyodide } = await import(pathToFileURL(join(pyodideFolder, "pyodide.mjs")).href);
  const pyodide = await loadPyodide({
    indexURL: pyodideFolder,
    env: { HOME: "/home/pyodide", PYTHONHASHSEED: "0" },
  });
  pyodide.FS.mkdirTree("/core/pycore");
  await copyInto(pyodide.FS, core, "/core/pycore");
  pyodide.FS.writeFile("/library.zip", await readFile(join(pyodideFolder, "python_stdlib.zip")));
  pyodide.runPython(await readFile(new URL("bytecode.py", import.meta.url), "utf8"));
  return pyodide.FS.readFile("/python.zip");
}

/**
 * @param {any} FS Pyodide's file system
 * @param {string} from
 * @param {string} to
 */
async function copyInto(FS, from, to) {
  const entries = await readdir(from, { withFileTypes: true });
  for (const entry of entries.sort((a, b) => (a.name < b.name ? -1 : 1))) {
    if (entry.name === "__pycache__") {
      continue;
    }
    const source = join(from, entry.name);
    const target = `${to}/${entry.name}`;
    if (entry.isDirectory()) {
      FS.mkdirTree(target);
      await copyInto(FS, source, target);
    } else {
      FS.writeFile(target, await readFile(source));
    }
  }
}
