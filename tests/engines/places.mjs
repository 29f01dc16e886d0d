/** Where the page is opened from: the disk and a server, whole and with something missing. */
import { cpSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { createServer } from "node:http";
import { tmpdir } from "node:os";
import { extname, join } from "node:path";
import { pathToFileURL } from "node:url";

const TYPES = { ".html": "text/html", ".js": "text/javascript", ".css": "text/css", ".txt": "text/plain" };

/**
 * @param {string} folder the built page
 * @returns {Promise<{places: {origin: string, start: string, url: string}[], strays: () => string[], end: () => void}>}
 * `strays`: what was asked of the server and is no file of the page
 */
export async function placesOf(folder) {
  const root = mkdtempSync(join(tmpdir(), "engines-"));
  const copies = { whole: join(root, "whole"), workerless: join(root, "workerless"), damaged: join(root, "damaged") };
  for (const copy of Object.values(copies)) cpSync(folder, copy, { recursive: true });

  // A browser that refuses workers, as some do to pages from disk.
  writeFileSync(join(copies.workerless, "refuse.js"), "globalThis.Worker = class { constructor() { throw new Error('refused'); } };\n");
  const index = join(copies.workerless, "index.html");
  const html = readFileSync(index, "utf8");
  writeFileSync(index, html.replace('<script src="app.js"', '<script src="refuse.js"></script>\n    <script src="app.js"'));

  // The kept memory is not what it should be: the library must take its place.
  const snapshot = join(copies.damaged, "engine", "snapshot.js");
  const text = readFileSync(snapshot, "utf16le"); // two bytes to a character, as the build packs it
  const middle = Math.floor(text.length / 2);
  writeFileSync(snapshot, text.slice(0, middle) + "A".repeat(1000) + text.slice(middle + 1000), "utf16le");

  /** @type {string[]} */
  const strays = [];
  const server = createServer((request, response) => {
    const path = decodeURIComponent(new URL(request.url ?? "/", "http://localhost").pathname);
    const file = join(root, path.endsWith("/") ? `${path}index.html` : path);
    try {
      const body = readFileSync(file);
      response.writeHead(200, { "Content-Type": TYPES[/** @type {keyof typeof TYPES} */ (extname(file))] ?? "application/octet-stream" });
      response.end(body);
    } catch {
      if (!path.endsWith("favicon.ico")) strays.push(`${request.method} ${path}`); // a browser asks for that one by itself
      response.writeHead(404).end();
    }
  });
  await new Promise((resolve) => server.listen(0, "127.0.0.1", () => resolve(undefined)));
  const { port } = /** @type {import("node:net").AddressInfo} */ (server.address());

  const disk = (/** @type {string} */ copy) => pathToFileURL(join(copy, "index.html")).href;
  const served = (/** @type {keyof typeof copies} */ name) => `http://localhost:${port}/${name}/`;
  const places = [
    { origin: "file", start: "worker, kept memory", url: disk(copies.whole) },
    { origin: "http", start: "worker, kept memory", url: served("whole") },
    { origin: "file", start: "no worker", url: disk(copies.workerless) },
    { origin: "http", start: "no worker", url: served("workerless") },
    { origin: "file", start: "library asked for", url: `${disk(copies.whole)}#library` },
    { origin: "file", start: "memory damaged", url: disk(copies.damaged) },
  ];
  return {
    places,
    strays: () => strays.splice(0),
    end: () => {
      server.close();
      rmSync(root, { recursive: true, force: true });
    },
  };
}
