/** The memory of the started engine, with the core imported and its first calls made, to start from in no time. */
import { execFile } from "node:child_process";
import { mkdtemp, readFile, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { promisify } from "node:util";
import { engineSource } from "./worker.mjs";

const beside = (/** @type {string} */ name) => fileURLToPath(new URL(name, import.meta.url));

/**
 * @param {string} pyodideFolder
 * @param {Uint8Array} library the zip of library and core
 * @returns {Promise<Uint8Array>}
 */
export async function buildSnapshot(pyodideFolder, library) {
  const folder = await mkdtemp(join(tmpdir(), "wedgewright-"));
  try {
    const [engine, zip, snapshot] = ["engine.js", "library.zip", "snapshot"].map((name) => join(folder, name));
    await writeFile(engine, await engineSource(pyodideFolder, beside("snapshot-entry.js")));
    await writeFile(zip, library);
    const program = join(pyodideFolder, "pyodide.asm.wasm");
    await promisify(execFile)(process.execPath, [beside("make-snapshot.mjs"), engine, program, zip, beside("warm.py"), snapshot]);
    return await readFile(snapshot);
  } finally {
    await rm(folder, { recursive: true });
  }
}
