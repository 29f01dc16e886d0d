/** The page itself: its script in one file, its policy, and the single file with everything inside. */
import { build } from "esbuild";
import { createHash } from "node:crypto";
import { readFile } from "node:fs/promises";
import { join } from "node:path";

/**
 * @typedef {object} Page
 * @property {string} html
 * @property {string} app
 * @property {string} style
 * @property {string} printStyle
 * @property {string} engine
 * @property {string} wasm
 * @property {string} snapshot
 * @property {string} python
 */

/** @param {string} web */
export async function buildScripts(web) {
  const bundle = await build({
    entryPoints: [join(web, "app", "main.js")],
    bundle: true,
    write: false,
    format: "iife",
    target: "es2022",
    charset: "utf8",
    logLevel: "warning",
  });
  return {
    app: bundle.outputFiles[0].text,
    style: await readFile(join(web, "app.css"), "utf8"),
    printStyle: await readFile(join(web, "print.css"), "utf8"),
  };
}

/**
 * The page's policy. Nothing may be loaded but our own scripts and styles, and nothing may be sent.
 *
 * @param {string} scripts
 * @param {string} styles
 */
function policy(scripts, styles) {
  const line =
    `default-src 'none'; script-src ${scripts} 'wasm-unsafe-eval'; worker-src 'self' blob:; style-src ${styles}; ` +
    "img-src data:; connect-src 'none'; form-action 'none'; base-uri 'none'; " +
    "require-trusted-types-for 'script'; trusted-types rt";
  return `<meta http-equiv="Content-Security-Policy" content="${line}">`;
}

/**
 * @param {string} html
 * @param {string} mark
 * @param {string} text
 */
function replaceOnce(html, mark, text) {
  if (html.split(mark).length !== 2) {
    throw new Error(`index.html must hold exactly once: ${mark}`);
  }
  return html.replace(mark, () => text);
}

/** @param {Page} page */
export function folderPage(page) {
  return replaceOnce(page.html, "<!-- policy -->", policy("'self'", "'self'"));
}

/** @param {string} text */
const hash = (text) => `'sha256-${createHash("sha256").update(text, "utf8").digest("base64")}'`;

/** @param {Page} page */
export function singlePage(page) {
  for (const text of [page.app, page.style, page.printStyle]) {
    if (/<\/(script|style)|<!--/i.test(text)) {
      throw new Error("A script or style cannot stand inside a page: it holds an end of script or style.");
    }
  }
  const scripts = [page.app, page.engine].map(hash).join(" ");
  const styles = [page.style, page.printStyle].map(hash).join(" ");
  const tail = [
    `<script>${page.app}</script>`,
    `<script>${page.engine}</script>`,
    `<script type="application/octet-stream" id="wedgewright-wasm">${page.wasm}</script>`,
    `<script type="application/octet-stream" id="wedgewright-snapshot">${page.snapshot}</script>`,
    `<script type="application/octet-stream" id="wedgewright-python">${page.python}</script>`,
    "</body>",
  ].join("\n");
  let html = replaceOnce(page.html, "<!-- policy -->", policy(scripts, styles));
  html = replaceOnce(html, '<meta charset="utf-8">', ""); // its first bytes say it
  html = replaceOnce(html, "<html ", "<html data-single ");
  html = replaceOnce(html, '<link rel="icon" href="data:,">', ""); // without it a browser asks a server for one
  html = replaceOnce(html, '<link rel="stylesheet" href="app.css">', `<style>${page.style}</style>`);
  html = replaceOnce(html, '<link rel="stylesheet" href="print.css" media="print">', `<style media="print">${page.printStyle}</style>`);
  html = replaceOnce(html, '<script src="app.js" defer></script>', "");
  return replaceOnce(html, "</body>", tail);
}
