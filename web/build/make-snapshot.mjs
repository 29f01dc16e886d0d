/**
 * Run in a Node of its own by snapshot.mjs, since it stops the clock and takes away chance:
 *
 *     node make-snapshot.mjs ENGINE PROGRAM LIBRARY WARM OUT
 */
import { readFileSync, writeFileSync } from "node:fs";
import { runInThisContext } from "node:vm";
import { dressAsWorker } from "./dress.mjs";

const [engine, program, library, warm, out] = process.argv.slice(2);
const script = readFileSync(engine, "utf8");
const given = {
  program: new Uint8Array(readFileSync(program)),
  library: new Uint8Array(readFileSync(library)),
  warm: readFileSync(warm, "utf8"),
};
const exit = dressAsWorker();
const page = /** @type {any} */ (globalThis);
const NOW = 315532800000; // 1980-01-01, as in the zip
page.Date = class extends Date {
  static now = () => NOW;
  constructor(/** @type {any} */ moment = NOW) {
    super(moment);
  }
};
performance.now = () => 0;
crypto.getRandomValues = (/** @type {any} */ array) => array.fill(7);
Object.defineProperty(page, "navigator", { value: { userAgent: "", languages: [] } });
try {
  runInThisContext(script, { filename: "engine.js" });
  writeFileSync(out, await page.wedgewrightEngine(given));
} catch (error) {
  console.error(error);
  exit(1);
}
exit(0);
