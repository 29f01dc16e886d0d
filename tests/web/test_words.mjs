// Every sentence the page can say is in the words file, and every word there is used.
import assert from "node:assert/strict";
import { readdirSync, readFileSync } from "node:fs";
import { join } from "node:path";
import { test } from "node:test";
import * as fields from "../../web/app/fields.js";
import { LANGUAGES, languageOf } from "../../web/app/language.js";
import { dateText, say, shown, useWords, writeWith } from "../../web/app/words.js";

const ROOT = new URL("../../web/", import.meta.url).pathname;
const own = JSON.parse(readFileSync(join(ROOT, "words-page.en.json"), "utf8"));
// The page to install from has no script: its codes stand in it as {{page.…}}.
const installPage = readFileSync(join(ROOT, "served", "install.html"), "utf8").replace(/\{\{([\w.]+)\}\}/g, '"$1"');
const sources = readdirSync(join(ROOT, "app"), { recursive: true })
  .filter((name) => String(name).endsWith(".js") && !String(name).startsWith("generated"))
  .map((name) => readFileSync(join(ROOT, "app", String(name)), "utf8"))
  .concat(installPage)
  .join("\n");

/** @param {any} node @param {string} path @returns {string[]} */
function leaves(node, path) {
  return typeof node === "string" ? [path] : Object.entries(node).flatMap(([name, inner]) => leaves(inner, `${path}.${name}`));
}
const known = leaves(own.page, "page");

test("each code that stands in the sources has its words", () => {
  const written = [...sources.matchAll(/"(page\.[\w.-]+)"/g)].map((match) => match[1]);
  assert.ok(written.length > 80);
  assert.deepEqual(written.filter((code) => !known.includes(code)), []);
});

test("each declared field has its label, each of its values its word", () => {
  const specs = Object.values(fields).flatMap((part) => (typeof part === "function" ? part("right") : part)).flat();
  const codes = specs.flatMap((spec) => [
    `page.labels.${spec.label}`,
    ...(spec.values ?? []).map((value) => `page.values.${spec.words}.${value || "blank"}`),
  ]);
  assert.ok(codes.length > 60);
  assert.deepEqual(codes.filter((code) => !known.includes(code)), []);
});

test("no word of the page is without use", () => {
  const groups = [...sources.matchAll(/`(page\.[^`]*?)\$\{/g)].map((match) => match[1]);
  const labels = [...sources.matchAll(/(?:label|words): "(\w+)"/g)].flatMap((match) => [`page.labels.${match[1]}`, `page.values.${match[1]}`]);
  const idle = known.filter(
    (code) => !sources.includes(`"${code}"`) && !groups.some((start) => code.startsWith(start)) && !labels.some((label) => code.startsWith(label)),
  );
  assert.deepEqual(idle, []);
});

test("holes are filled with the text given, a missing word shows its code", () => {
  useWords({ verdict: { "a.b": "{x} of {y}" } });
  assert.equal(say("verdict.a.b", { x: "0.25", y: "0.67" }), "0.25 of 0.67");
  assert.equal(say("verdict.a.b", { x: "1" }), "1 of {y}");
  assert.equal(say("verdict.none"), "verdict.none");
});

test("the decimal sign is swapped, clause numbers and names are not", () => {
  writeWith({ decimal: "comma", date: "iso" });
  assert.equal(shown("3.35 Δ at 26.6° (3.00 in 1.50 up)"), "3,35 Δ at 26,6° (3,00 in 1,50 up)");
  assert.equal(shown("Z80.1-2015, 5.1.4"), "Z80.1-2015, 5.1.4");
  writeWith({ decimal: "point", date: "iso" });
  assert.equal(shown("3.35 Δ"), "3.35 Δ");
});

test("a moment is written as the shop writes its dates", () => {
  const moment = "2026-12-01 15:20";
  for (const [date, text] of [
    ["iso", "2026-12-01 15:20"],
    ["day", "01/12/2026 15:20"],
    ["day-point", "01.12.2026 15:20"],
    ["month", "12/01/2026 15:20"],
  ]) {
    writeWith({ decimal: "comma", date });
    assert.equal(shown(dateText(moment)), text);
  }
  writeWith({ decimal: "point", date: "iso" });
});

test("the decimal sign follows the language unless it is chosen", () => {
  useWords({ page: { language: { decimal: "comma" } } });
  writeWith({ decimal: "language", date: "iso" });
  assert.equal(shown("0.25"), "0,25");
  writeWith({ decimal: "point", date: "iso" });
  assert.equal(shown("0.25"), "0.25");
});

test("a language is the one chosen, else the device's first that there is, else English", () => {
  assert.deepEqual(LANGUAGES, ["de", "en"]);
  assert.equal(languageOf({ language: "de" }, ["en-GB"]), "de");
  assert.equal(languageOf({ language: "auto" }, ["fr-FR", "de-AT", "en"]), "de");
  assert.equal(languageOf({ language: "auto" }, ["fr-FR"]), "en");
  assert.equal(languageOf({ language: "toString" }, []), "en");
});
