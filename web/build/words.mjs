/** Merges the core's sentences with the page's own, language by language, into one module of the page. */
import { mkdir, readdir, readFile, writeFile } from "node:fs/promises";
import { join } from "node:path";

/** @param {string} file */
const readJson = async (file) => JSON.parse(await readFile(file, "utf8"));

/**
 * @param {string} core folder of pycore
 * @param {string} web folder of the page's sources
 */
export async function writeWords(core, web) {
  const names = (await readdir(join(core, "words"))).filter((name) => name.endsWith(".json"));
  /** @type {Record<string, string>} */
  const all = {};
  for (const language of names.map((name) => name.replace(".json", "")).sort()) {
    const words = await readJson(join(core, "words", `${language}.json`));
    const own = await readJson(join(web, `words-page.${language}.json`));
    words.page = { ...words.page, ...own.page };
    all[language] = JSON.stringify(words);
  }
  const folder = join(web, "app", "generated");
  await mkdir(folder, { recursive: true });
  const text = `// Written by the build.\n/** @type {Record<string, string>} */\nexport default ${JSON.stringify(all, null, 1)};\n`;
  await writeFile(join(folder, "words.js"), text);
}
