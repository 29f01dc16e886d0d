/**
 * Each browser behind the same few words: open, evaluate, click, errors, close. Chromium and Firefox are driven by
 * puppeteer-core, WebKit (which it does not know) by its own WebDriver.
 */
import { execFileSync, spawn } from "node:child_process";
import { existsSync } from "node:fs";
import { createRequire } from "node:module";
import { createServer } from "node:net";
import { pathToFileURL } from "node:url";

/**
 * @typedef {object} Driver
 * @property {string} name
 * @property {string} version
 * @property {(url: string) => Promise<void>} open
 * @property {(expression: string) => Promise<any>} evaluate
 * @property {(x: number, y: number) => Promise<void>} click at a place of the window, as a finger or mouse does
 * @property {(key: string) => Promise<void>} type characters into what has the focus
 * @property {() => Promise<string[]>} errors what the console has been told since the page was opened
 * @property {() => Promise<void>} close
 */

const require = createRequire(new URL("../../web/package.json", import.meta.url));
const { default: puppeteer } = await import(pathToFileURL(require.resolve("puppeteer-core")).href);

/** @param {string[]} paths the first of these that is there */
const firstThere = (paths) => paths.find((path) => existsSync(path));

const CHROMIUM = ["/usr/bin/chromium", new URL("../../.tools/chromium/chromium", import.meta.url).pathname];
const FIREFOX = ["/usr/bin/firefox-esr", "/usr/bin/firefox"];
const WEBKIT = { driver: "/usr/bin/WebKitWebDriver", folders: ["/usr/lib/x86_64-linux-gnu", "/usr/lib/aarch64-linux-gnu"] };

/** @param {"chrome" | "firefox"} browser @param {string} program @param {string[]} args @param {object} [viewport] @returns {Promise<Driver>} */
async function withPuppeteer(browser, program, args, viewport = { width: 1024, height: 768, hasTouch: false }) {
  const running = await puppeteer.launch({ browser, executablePath: program, headless: true, args, defaultViewport: viewport });
  const page = await running.newPage();
  /** @type {string[]} */
  let errors = [];
  page.on("pageerror", (/** @type {Error} */ error) => errors.push(String(error)));
  page.on("console", (/** @type {any} */ message) => message.type() === "error" && errors.push(message.text()));
  return {
    name: browser === "chrome" ? "Chromium" : "Firefox",
    version: (await running.version()).replace(/^.*\//, ""),
    open: async (url) => {
      errors = [];
      await page.goto(url);
    },
    evaluate: (expression) => page.evaluate(expression),
    click: (x, y) => (viewport.hasTouch ? page.touchscreen.tap(x, y) : page.mouse.click(x, y)),
    type: (text) => page.keyboard.type(text),
    errors: async () => errors,
    close: () => running.close(),
  };
}

/** A port that is free now. @returns {Promise<number>} */
const freePort = () =>
  new Promise((resolve) => {
    const server = createServer().listen(0, "127.0.0.1", () => {
      const { port } = /** @type {import("node:net").AddressInfo} */ (server.address());
      server.close(() => resolve(port));
    });
  });

/** WebKitGTK stands in for Safari: the same engine, another body. @param {string} program MiniBrowser @returns {Promise<Driver>} */
async function withWebDriver(program) {
  const port = await freePort();
  const environment = { ...process.env, WEBKIT_DISABLE_SANDBOX_THIS_IS_DANGEROUS: "1" };
  const command = ["-a", WEBKIT.driver, `--port=${port}`];
  const driver = spawn("xvfb-run", command, { env: environment, stdio: "ignore", detached: true });
  const call = async (/** @type {string} */ method, /** @type {string} */ path, /** @type {object} */ body) => {
    const answer = await fetch(`http://127.0.0.1:${port}${path}`, { method, body: body && JSON.stringify(body) });
    const { value } = /** @type {any} */ (await answer.json());
    if (!answer.ok) throw new Error(`${path}: ${value?.message ?? answer.status}`);
    return value;
  };
  for (let tries = 0; ; tries += 1) {
    try {
      await call("GET", "/status", /** @type {any} */ (undefined));
      break;
    } catch (error) {
      if (tries > 100) throw error;
      await new Promise((resolve) => setTimeout(resolve, 100));
    }
  }
  const wanted = { alwaysMatch: { "webkitgtk:browserOptions": { binary: program, args: ["--automation"] } } };
  const { sessionId, capabilities } = await call("POST", "/session", { capabilities: wanted });
  const session = `/session/${sessionId}`;
  await call("POST", `${session}/window/rect`, { width: 1024, height: 868 });
  const pointer = (/** @type {object[]} */ actions) =>
    call("POST", `${session}/actions`, { actions: [{ type: "pointer", id: "mouse", parameters: { pointerType: "mouse" }, actions }] });
  const evaluate = (/** @type {string} */ expression) => call("POST", `${session}/execute/sync`, { script: `return (${expression});`, args: [] });
  return {
    name: "WebKitGTK",
    version: capabilities.browserVersion,
    open: async (url) => {
      await call("POST", `${session}/url`, { url });
      // This driver tells of no console; what goes wrong from here on is kept by the page.
      await evaluate(`(() => {
        globalThis.wrongs = [];
        addEventListener("error", (event) => wrongs.push(String(event.message)));
        addEventListener("unhandledrejection", (event) => wrongs.push(String(event.reason)));
        addEventListener("securitypolicyviolation", (event) => wrongs.push(event.violatedDirective + " " + event.blockedURI));
      })()`);
    },
    evaluate,
    click: (x, y) =>
      pointer([
        { type: "pointerMove", duration: 0, x: Math.round(x), y: Math.round(y), origin: "viewport" },
        { type: "pointerDown", button: 0 },
        { type: "pointerUp", button: 0 },
      ]),
    type: async (text) => {
      const actions = [...text].flatMap((value) => [{ type: "keyDown", value }, { type: "keyUp", value }]);
      await call("POST", `${session}/actions`, { actions: [{ type: "key", id: "keys", actions }] });
    },
    errors: () => evaluate("globalThis.wrongs ?? []"),
    close: async () => {
      await call("DELETE", session, /** @type {any} */ (undefined)).catch(() => {});
      process.kill(-(/** @type {number} */ (driver.pid)), "SIGTERM");
    },
  };
}

/** Every browser there is on this machine, by a word of one's own. @returns {Record<string, (() => Promise<Driver>) | undefined>} */
export function browsers() {
  const chromium = firstThere(CHROMIUM);
  const firefox = firstThere(FIREFOX);
  const webkit = existsSync(WEBKIT.driver) ? firstThere(WEBKIT.folders.map((folder) => `${folder}/webkit2gtk-4.1/MiniBrowser`)) : undefined;
  const flags = execFileSync("python3", ["-c", "import chromium; print(*chromium.FLAGS)"], {
    cwd: new URL("../browser", import.meta.url).pathname,
    encoding: "utf8",
  });
  const chromiumFlags = flags.trim().split(" ");
  return {
    Chromium: chromium ? () => withPuppeteer("chrome", chromium, chromiumFlags) : undefined,
    "Chromium, tablet by touch": chromium ? () => withPuppeteer("chrome", chromium, chromiumFlags, { width: 800, height: 1280, hasTouch: true }) : undefined,
    "Chromium, phone by touch": chromium ? () => withPuppeteer("chrome", chromium, chromiumFlags, { width: 360, height: 740, hasTouch: true }) : undefined,
    Firefox: firefox ? () => withPuppeteer("firefox", firefox, []) : undefined,
    WebKitGTK: webkit ? () => withWebDriver(webkit) : undefined,
  };
}
