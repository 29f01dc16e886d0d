/**
 * Builds the page's folder and the single file out of the core, the page's sources and the pinned Pyodide.
 *
 *     node web/build/build.mjs --core pycore --web web --out dist --single dist-single
 *
 * The result depends on the inputs alone: names are sorted, no time of day and no path of this machine goes in.
 */
import { mkdir, readFile, rm, writeFile } from "node:fs/promises";
import { createRequire } from "node:module";
import { dirname, join, resolve } from "node:path";
import { parseArgs } from "node:util";
import { markFor, packed, wide } from "./payload.mjs";
import { buildScripts, folderPage, singlePage } from "./page.mjs";
import { namesOf, withUsedExports } from "./program.mjs";
import { buildPythonZip } from "./python.mjs";
import { usedScripts } from "./scripts.mjs";
import { servedFiles } from "./served.mjs";
import { buildSnapshot } from "./snapshot.mjs";
import { engineSource } from "./worker.mjs";
import { writeWords } from "./words.mjs";

const pyodideFolder = dirname(createRequire(import.meta.url).resolve("pyodide/package.json"));

/**
 * @param {string} folder
 * @param {Record<string, string | Uint8Array>} files path below the folder → contents
 */
async function writeFolder(folder, files) {
  await rm(folder, { recursive: true, force: true });
  for (const name of Object.keys(files).sort()) {
    await mkdir(dirname(join(folder, name)), { recursive: true });
    await writeFile(join(folder, name), files[name]);
  }
}

/** The notices of what is bundled, in one text. @param {string} folder */
async function notices(folder) {
  const names = ["bundled.txt", "mpl-2.0.txt", "python-3.13.txt"];
  const texts = await Promise.all(names.map((name) => readFile(join(folder, name), "utf8")));
  return texts.join(`\n${"=".repeat(120)}\n\n`);
}

/** The program's version, as the core says it. @param {string} core */
async function versionOf(core) {
  const found = /^__version__ = "([^"]+)"$/m.exec(await readFile(join(core, "__init__.py"), "utf8"));
  if (!found) throw new Error("__init__.py does not say the program's version.");
  return found[1];
}

/**
 * Pyodide's program and scripts, cut to what is used here, and round them the engine of the page and the one that makes
 * the page's snapshot.
 *
 * @param {string} web
 */
async function buildEngine(web) {
  const read = (/** @type {string} */ name) => readFile(join(pyodideFolder, name), "utf8");
  const { info } = JSON.parse(await read("pyodide-lock.json"));
  const whole = `${await read("pyodide.asm.js")}\n${await read("pyodide.js")}`;
  const worker = join(web, "worker", "main.js");
  const other = join(web, "worker", "snapshot.js");
  const exported = withUsedExports(await readFile(join(pyodideFolder, "pyodide.asm.wasm")), whole + (await readFile(other, "utf8")));
  const scripts = await usedScripts(whole, namesOf(exported));
  const [engine, maker] = [await engineSource(scripts, info, worker), await engineSource(scripts, info, other)];
  return { program: withUsedExports(exported, engine + maker), engine, maker };
}

async function main() {
  const { values } = parseArgs({
    options: {
      core: { type: "string", default: "pycore" },
      web: { type: "string", default: "web" },
      out: { type: "string", default: "dist" },
      single: { type: "string", default: "dist-single" },
      licence: { type: "string", default: "LICENSE" },
      notices: { type: "string", default: "notices" },
    },
  });
  const core = resolve(values.core);
  const web = resolve(values.web);
  await writeWords(core, web);
  const { program, engine, maker } = await buildEngine(web);
  const library = await buildPythonZip(pyodideFolder, core);
  const mark = markFor(program);
  const page = {
    html: await readFile(join(web, "index.html"), "utf8"),
    ...(await buildScripts(web)),
    engine,
    wasm: packed(program, mark),
    snapshot: packed(await buildSnapshot(maker, program, library), mark),
    python: packed(library, mark),
  };
  const files = {
    "index.html": folderPage(page),
    "app.js": page.app,
    "app.css": page.style,
    "print.css": page.printStyle,
    "styles.js": `globalThis.wedgewrightStyles = ${JSON.stringify({ screen: page.style, print: page.printStyle })};\n`,
    "engine/worker.js": engine,
    "engine/wasm.js": wide(`globalThis.wedgewrightWasm = "${page.wasm}";\n`),
    "engine/snapshot.js": wide(`globalThis.wedgewrightSnapshot = "${page.snapshot}";\n`),
    "engine/python.js": wide(`globalThis.wedgewrightPython = "${page.python}";\n`),
    "LICENSE.txt": await readFile(resolve(values.licence), "utf8"),
    "NOTICES.txt": await notices(resolve(values.notices)),
  };
  await writeFolder(resolve(values.out), { ...files, ...(await servedFiles(web, files, await versionOf(core))) });
  await writeFolder(resolve(values.single), { "wedgewright.html": wide(singlePage(page)) });
}

try {
  await main();
} catch (error) {
  // Not left to Node, whose own report quotes the line of Pyodide's script, which is a megabyte long.
  console.error(error instanceof Error ? error.stack : error);
  process.exitCode = 1;
}
