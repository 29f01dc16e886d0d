/** The memory of the started engine, with the core imported and its first calls made, to start from in no time. */
import { execFile } from "node:child_process";
import { mkdtemp, readFile, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { promisify } from "node:util";

const beside = (/** @type {string} */ name) => fileURLToPath(new URL(name, import.meta.url));

/**
 * @param {string} engine source of the engine that makes it
 * @param {Uint8Array} program
 * @param {Uint8Array} library the zip of library and core
 * @returns {Promise<Uint8Array>}
 */
export async function buildSnapshot(engine, program, library) {
  const folder = await mkdtemp(join(tmpdir(), "wedgewright-"));
  try {
    const given = { "engine.js": engine, "program.wasm": program, "library.zip": library };
    const files = [];
    for (const [name, contents] of Object.entries(given)) {
      files.push(join(folder, name));
      await writeFile(join(folder, name), contents);
    }
    const snapshot = join(folder, "snapshot");
    const env = { ...process.env, TZ: "UTC", LC_ALL: "C" }; // both would stay in the memory
    await promisify(execFile)(process.execPath, [beside("make-snapshot.mjs"), ...files, beside("warm.py"), snapshot], { env });
    return await readFile(snapshot);
  } finally {
    await rm(folder, { recursive: true });
  }
}
