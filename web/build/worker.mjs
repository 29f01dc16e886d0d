/** Puts the engine's source together: Pyodide unaltered, inside a function, and our few lines that start it. */
import { build } from "esbuild";
import { readFile } from "node:fs/promises";
import { join } from "node:path";

/**
 * The text of `globalThis.wedgewrightEngine = function (port) {…}`. The page makes a worker of the function's own text, or
 * calls it where workers are refused. Pyodide's two scripts see our `fetch` and `WebAssembly` as the names of parameters,
 * so that they cannot reach the network, whatever they ask for.
 *
 * @param {string} pyodideFolder
 * @param {string} entry
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
  const scripts = [];
  for (const name of ["pyodide.asm.js", "pyodide.js"]) {
    scripts.push(await readFile(join(pyodideFolder, name), "utf8"));
  }
  const source = [
    "globalThis.wedgewrightEngine = function (port) {",
    "function pyodideBehind(fetch, WebAssembly) {",
    ...scripts,
    "return loadPyodide.loadPyodide;",
    "}",
    glue.outputFiles[0].text,
    "wedgewright.serve(port, pyodideBehind);",
    "};",
    "",
  ].join("\n");
  if (/<\/script|<!--/i.test(source)) {
    throw new Error("The engine's source cannot stand inside a page: it holds an end of script.");
  }
  return source;
}
