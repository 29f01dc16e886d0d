/** What Pyodide's own lock file says of its version; put in by the build. */
declare const PYODIDE_LOCK_INFO: Record<string, string>;
