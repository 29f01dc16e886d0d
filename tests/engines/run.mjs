/**
 * The same run in every engine, from disk and from a server, by each way of starting: prints a table, and what differs.
 *
 *     node tests/engines/run.mjs dist [ENGINE …]
 */
import { resolve } from "node:path";
import { browsers } from "./drivers.mjs";
import { placesOf } from "./places.mjs";
import { FEATURES, loadedFromElsewhere, STEPS } from "./steps.mjs";

const [folder, ...only] = process.argv.slice(2);
const { places, strays, end } = await placesOf(resolve(folder));
/** @type {string[]} */
const wrong = [];
/** @type {Record<string, Record<string, boolean>>} */
const features = {};

/** @param {import("./drivers.mjs").Driver} driver @param {string} name @param {{origin: string, start: string, url: string}} place */
async function runOnce(driver, name, { origin, start, url }) {
  const where = `${name}, ${origin}, ${start}`;
  const marks = [];
  const fail = (/** @type {string} */ what) => wrong.push(`${where}: ${what}`);
  await driver.open(url);
  const began = await driver.evaluate("document.documentElement.dataset.engine");
  for (const [step, act] of STEPS) {
    try {
      await act(driver);
      marks.push("+");
    } catch (error) {
      marks.push("-");
      fail(`${step}: ${error instanceof Error ? error.message : error}`);
      break;
    }
  }
  const errors = await driver.errors();
  const elsewhere = [...(await loadedFromElsewhere(driver)), ...strays()];
  for (const error of errors) fail(`console: ${error}`);
  for (const address of elsewhere) fail(`loaded: ${address}`);
  const said = await driver.evaluate('document.getElementById("started")?.textContent ?? ""');
  console.log(`${where.padEnd(52)} ${marks.join("").padEnd(STEPS.length)} ${errors.length} errors, ${elsewhere.length} loaded; typed while ${began}; ${said}`);
}

console.log(`Steps: ${STEPS.map(([step], index) => `${index + 1} ${step}`).join("; ")}.\n`);
for (const [name, launch] of Object.entries(browsers())) {
  if (only.length && !only.includes(name)) continue;
  if (!launch) {
    console.log(`${name}: not on this machine, so nothing is known of it.`);
    wrong.push(`${name}: not here`);
    continue;
  }
  for (const place of places) {
    // A browser of its own each time: nothing stored, nothing warm.
    const driver = await launch();
    try {
      if (place === places[0]) console.log(`${name}: ${driver.version}`);
      await runOnce(driver, name, place);
      if (place === places[1]) {
        features[name] = Object.fromEntries(
          await Promise.all(Object.entries(FEATURES).map(async ([feature, expression]) => [feature, Boolean(await driver.evaluate(expression))])),
        );
      }
    } catch (error) {
      wrong.push(`${name}, ${place.origin}, ${place.start}: ${error}`);
    } finally {
      await driver.close();
    }
  }
}
end();

console.log("\nWhat they have (over http):");
for (const feature of Object.keys(FEATURES)) {
  const lacking = Object.keys(features).filter((name) => !features[name][feature]);
  console.log(`  ${feature.padEnd(30)} ${lacking.length ? `not in ${lacking.join(", ")}` : "everywhere"}`);
}
console.log(wrong.length ? `\nDifferences and failures:\n  ${wrong.join("\n  ")}` : "\nNo differences: every step went well everywhere.");
process.exit(wrong.length ? 1 : 0);
