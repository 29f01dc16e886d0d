/** Makes Node look like a browser's worker, which is where Pyodide's scripts are to believe they are. */

/**
 * @returns {(code?: number) => never} the way out, since Pyodide must not find `process`
 */
export function dressAsWorker() {
  const exit = process.exit.bind(process);
  const page = /** @type {any} */ (globalThis);
  // Pyodide asks by these names where it runs; without `process` and with the rest it is as in a worker.
  delete page.process;
  page.self = page;
  page.location = new URL("https://offline.invalid/");
  page.WorkerGlobalScope = class {
    static [Symbol.hasInstance]() {
      return true;
    }
  };
  return exit;
}
