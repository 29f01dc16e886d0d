/** Puts the engine's source together: Pyodide's scripts inside a function, and our few lines that start it. */
import { build } from "esbuild";

/**
 * The text of `globalThis.wedgewrightEngine = function (port) {…}`. The page makes a worker of the function's own text, or
 * calls it where workers are refused. Pyodide's scripts see our `fetch` and `WebAssembly` as the names of parameters, so
 * that they cannot reach the network, whatever they ask for.
 *
 * @param {string} scripts Pyodide's
 * @param {Record<string, string>} lockInfo what Pyodide's lock file says of its version
 * @param {string} entry the module that exports `serve(port, pyodideBehind)`
 */
export async function engineSource(scripts, lockInfo, entry) {
  const glue = await build({
    entryPoints: [entry],
    bundle: true,
    write: false,
    format: "iife",
    globalName: "wedgewright",
    target: "es2022",
    charset: "ascii",
    define: { PYODIDE_LOCK_INFO: JSON.stringify(lockInfo) },
    logLevel: "warning",
  });
  const source = [
    "globalThis.wedgewrightEngine = function (port) {",
    "function pyodideBehind(fetch, WebAssembly, exports) {",
    scripts,
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
