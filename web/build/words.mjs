/** Merges the core's sentences with the page's own into one module of the page. */
import { mkdir, readFile, writeFile } from "node:fs/promises";
import { join } from "node:path";

/**
 * @param {string} core folder of pycore
 * @param {string} web folder of the page's sources
 */
export async function writeWords(core, web) {
  const words = JSON.parse(await readFile(join(core, "words", "en.json"), "utf8"));
  const own = JSON.parse(await readFile(join(web, "words-page.en.json"), "utf8"));
  words.page = { ...words.page, ...own.page };
  const folder = join(web, "app", "generated");
  await mkdir(folder, { recursive: true });
  await writeFile(join(folder, "words.js"), `// Written by the build.\nexport default ${JSON.stringify(words, null, 1)};\n`);
}
