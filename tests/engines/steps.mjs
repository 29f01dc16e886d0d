/** The run through the page that is the same in every browser: each step a name and what must be true after it. */

/** @typedef {import("./drivers.mjs").Driver} Driver */

const PATIENCE_MS = 30_000;
const LINE = "R -2.25 +1.50 x20 3 BI 1.5 BU add 2 L -1.75 +1.00 x165 3 BI 1.5 BD add 2";

/** @param {Driver} driver @param {string} expression waits until it is true; while a page is being opened it may fail */
export async function until(driver, expression, patience = PATIENCE_MS) {
  const end = Date.now() + patience;
  for (;;) {
    const found = await driver.evaluate(expression).catch(() => false);
    if (found) return found;
    if (Date.now() > end) throw new Error(`never true: ${expression}`);
    await new Promise((resolve) => setTimeout(resolve, 50));
  }
}

/** @param {Driver} driver @param {string} selector a finger's touch on the middle of what it finds */
async function touch(driver, selector) {
  const name = JSON.stringify(selector);
  await until(driver, `!!document.querySelector(${name})?.checkVisibility?.()`);
  const [x, y] = await driver.evaluate(`(() => {
    const node = document.querySelector(${name});
    node.scrollIntoView({ block: "center" });
    const box = node.getBoundingClientRect();
    return [box.x + box.width / 2, box.y + box.height / 2];
  })()`);
  await driver.click(x, y);
}

const text = (/** @type {string} */ selector) => `(document.querySelector(${JSON.stringify(selector)})?.textContent ?? "")`;
const value = (/** @type {string} */ id) => `document.getElementById(${JSON.stringify(id)}).value`;
const outcome = (/** @type {string} */ wanted) => `document.getElementById("strip").dataset.outcome === "${wanted}"`;

/** @param {Driver} driver @param {number} x @param {number} y prism dioptres on the right lens's dial, found by its rings */
async function touchDial(driver, x, y) {
  const place = await driver.evaluate(`(() => {
    const dial = document.getElementById("dial-right");
    dial.scrollIntoView({ block: "center" });
    const rings = [...dial.querySelectorAll(".role-ring")].map((ring) => ring.getBoundingClientRect());
    const outermost = rings.reduce((a, b) => (a.width > b.width ? a : b));
    const step = outermost.width / 2 / rings.length;
    return [outermost.x + outermost.width / 2 + ${x} * step, outermost.y + outermost.height / 2 - ${y} * step];
  })()`);
  await driver.click(place[0], place[1]);
}

/** @type {[string, (driver: Driver) => Promise<void>][]} */
export const STEPS = [
  ["order typed at once", async (driver) => {
    await driver.evaluate('document.getElementById("f-line").focus()');
    await driver.type(LINE);
    await until(driver, `${value("f-line")} === ${JSON.stringify(LINE)}`);
  }],
  ["engine ready", async (driver) => {
    await until(driver, 'document.documentElement.dataset.engine === "ready"');
  }],
  ["line read and taken", async (driver) => {
    await until(driver, '!document.getElementById("take-it").disabled');
    await touch(driver, "#take-it");
    await until(driver, `${value("f-right-sphere")} === "-2.25"`);
  }],
  ["demonstration within", async (driver) => {
    await touch(driver, "#move-keep");
    await touch(driver, "#demonstration-kept");
    await until(driver, outcome("within"));
  }],
  ["read by touch, outside", async (driver) => {
    await touch(driver, "#move-read");
    await until(driver, 'document.querySelectorAll("#dial-right .role-ring").length === 5');
    await touchDial(driver, 1.02, 3.02);
    await until(driver, `${value("f-readings-right-prism-0-amount")} === "1.00"`);
    await until(driver, `${value("f-readings-right-prism-1-amount")} === "3.00"`);
    await until(driver, outcome("outside"));
  }],
  ["verdict in words", async (driver) => {
    await until(driver, `/^Over: .+ANSI Z80\\.1-2015\\.$/.test(${text("#strip .sentence")})`);
  }],
  ["panels worked out", async (driver) => {
    await touch(driver, "#move-layout");
    await until(driver, '[...document.querySelectorAll("#view-layout .panel > summary")].every((one) => one.textContent.length > 12)');
  }],
  ["saved", async (driver) => {
    await until(driver, '["saved", "recovered"].includes(document.querySelector(".save").dataset.status)', 5000);
  }],
  ["taken up after a reload", async (driver) => {
    await driver.evaluate("void (globalThis.before = true, location.reload())");
    await until(driver, `!globalThis.before && document.getElementById("strip")?.dataset.outcome === "outside"`);
    await until(driver, `${value("f-readings-right-prism-1-amount")} === "3.00"`);
  }],
  ["sheet to print", async (driver) => {
    await driver.evaluate('void dispatchEvent(new Event("beforeprint"))');
    await until(driver, `${text("#sheet")}.includes("DEMO-1042")`);
    await until(driver, 'document.querySelectorAll("#sheet svg.dial").length === 4');
  }],
  ["nothing scrolls sideways", async (driver) => {
    await until(driver, "document.documentElement.scrollWidth <= innerWidth", 2000);
  }],
];

/** Everything that a page from this address has loaded and that is not its own. @param {Driver} driver @returns {Promise<string[]>} */
export function loadedFromElsewhere(driver) {
  return driver.evaluate(`performance.getEntriesByType("resource").map((entry) => entry.name)
    .filter((name) => !name.startsWith("blob:") && !name.startsWith(location.href.replace(/[^/]*$/, "")))`);
}

/** What browsers have or lack of what the page would use. */
export const FEATURES = {
  "Uint8Array.fromBase64": '"fromBase64" in Uint8Array',
  DecompressionStream: '"DecompressionStream" in globalThis',
  "WebAssembly.compileStreaming": '"compileStreaming" in WebAssembly',
  trustedTypes: '"trustedTypes" in globalThis',
  "navigator.locks": '"locks" in navigator',
  "light-dark()": 'CSS.supports("color", "light-dark(red, blue)")',
  "@container": 'CSS.supports("container-type", "inline-size")',
  ":has()": 'CSS.supports("selector(:has(a))")',
  checkVisibility: '"checkVisibility" in Element.prototype',
  "paint timing": '!!globalThis.PerformanceObserver?.supportedEntryTypes?.includes("first-contentful-paint") || PerformanceObserver.supportedEntryTypes.includes("paint")',
  "serviceWorker here": '"serviceWorker" in navigator && isSecureContext',
  "crypto.subtle here": 'Boolean(crypto.subtle)',
};
