/** What only a server needs: the service worker with the list of all other files, and the page from which it is installed. */
import { build } from "esbuild";
import { createHash } from "node:crypto";
import { readdir, readFile } from "node:fs/promises";
import { join } from "node:path";

/** @param {string | Uint8Array} content */
const digestOf = (content) => createHash("sha256").update(content).digest("hex");

/** The page from which it is installed has no script, so it says everything in each language. @param {string} web */
async function installPage(web) {
  const [before, card, after] = (await readFile(join(web, "served", "install.html"), "utf8")).split(/ *<!-- .* -->\n/);
  let cards = "";
  for (const file of (await readdir(web)).filter((name) => name.startsWith("words-page.")).sort()) {
    const words = JSON.parse(await readFile(join(web, file), "utf8"));
    const say = (/** @type {string} */ code) => code.split(".").reduce((place, step) => place[step], words);
    cards += card.replace("{{language}}", file.split(".")[1]).replace(/\{\{([\w.]+)\}\}/g, (_mark, code) => say(code));
  }
  return before + cards + after;
}

/**
 * @param {string} web
 * @param {Record<string, string | Uint8Array>} files every other file of the folder, by its name
 * @param {string} program the program's version
 * @returns {Promise<Record<string, string>>}
 */
export async function servedFiles(web, files, program) {
  const added = {
    "install.html": await installPage(web),
    "install.json": await readFile(join(web, "served", "install.json"), "utf8"),
  };
  /** @type {Record<string, string | Uint8Array>} */
  const all = { ...files, ...added };
  const digests = Object.fromEntries(Object.keys(all).sort().map((name) => [name, digestOf(all[name])]));
  const bundle = await build({
    entryPoints: [join(web, "served", "sw.js")],
    bundle: true,
    write: false,
    format: "iife",
    target: "es2022",
    charset: "utf8",
    define: { BUILD: JSON.stringify({ id: digestOf(JSON.stringify(digests)), program, files: digests }) },
    logLevel: "warning",
  });
  return { ...added, "sw.js": bundle.outputFiles[0].text };
}
