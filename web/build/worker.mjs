/** Puts the engine's source together: Pyodide's scripts inside a function, and our few lines that start it. */
import { build } from "esbuild";
import { readFile } from "node:fs/promises";
import { join } from "node:path";

/**
 * The only change to Pyodide's scripts. When Python starts, this function makes a helper outside of Python's memory and
 * leaves its number inside: in a snapshot the number would point to nothing. So it leaves none while a snapshot is made,
 * and is called again, by the name given here, when one has been loaded.
 */
const TRAMPOLINE = {
  original: "function _PyEM_InitTrampoline_js(){",
  changed:
    "Module.initTrampoline=_PyEM_InitTrampoline_js;function _PyEM_InitTrampoline_js(){if(Module.API.config._makeSnapshot)return;",
};

/**
 * @param {string} text
 * @param {string} original
 * @param {string} changed
 */
function replaceOnce(text, original, changed) {
  if (text.split(original).length !== 2) {
    throw new Error(`Pyodide's script must hold exactly once: ${original}`);
  }
  return text.replace(original, () => changed);
}

/**
 * The text of `globalThis.wedgewrightEngine = function (port) {…}`. The page makes a worker of the function's own text, or
 * calls it where workers are refused. Pyodide's two scripts see our `fetch` and `WebAssembly` as the names of parameters,
 * so that they cannot reach the network, whatever they ask for.
 *
 * @param {string} pyodideFolder
 * @param {string} entry the module that exports `serve(port, pyodideBehind)`
 */
export async function engineSource(pyodideFolder, entry) {
  const lock = JSON.parse(await readFile(join(pyodideFolder, "pyodide-lock.json"), "utf8"));
  const glue = await build({
    entryPoints: [entry],
    bundle: true,
    write: false,
    format: "iife",
    globalName: "wedgewright",
    target: "es2022",
    charset: "ascii",
    define: { PYODIDE_LOCK_INFO: JSON.stringify(lock.info) },
    logLevel: "warning",
  });
  const runtime = await readFile(join(pyodideFolder, "pyodide.asm.js"), "utf8");
  const source = [
    "globalThis.wedgewrightEngine = function (port) {",
    "function pyodideBehind(fetch, WebAssembly) {",
    replaceOnce(runtime, TRAMPOLINE.original, TRAMPOLINE.changed),
    await readFile(join(pyodideFolder, "pyodide.js"), "utf8"),
    "return loadPyodide.loadPyodide;",
    "}",
    glue.outputFiles[0].text,
    "return wedgewright.serve(port, pyodideBehind);",
    "};",
    "",
  ].join("\n");
  if (/<\/script|<!--/i.test(source)) {
    throw new Error("The engine's source cannot stand inside a page: it holds an end of script.");
  }
  return source;
}
