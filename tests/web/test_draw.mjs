// Scenes to marks, prisms to rows, keys to text: what the page decides by itself, without a document.
import assert from "node:assert/strict";
import { test } from "node:test";
import { marksOf, viewBox } from "../../web/app/dial.js";
import { newestWhole, stamp } from "../../web/app/keeping.js";
import { withEnding, withSign } from "../../web/app/keypad.js";
import { putPrism, rowsOf, wayOf } from "../../web/app/prism-rows.js";
import { fileName } from "../../web/app/files.js";

test("the core's y goes up, the screen's down", () => {
  assert.deepEqual(viewBox({ unit: "Δ", extent: [1, 2, 5, 8], shapes: [] }), [1, -8, 4, 6]);
  const [line] = marksOf({ role: "ordered", kind: "line", x: 0, y: 0, x2: 3, y2: 1.5 }, 0.1, "h");
  assert.deepEqual([line.attributes.x2, line.attributes.y2], [3, -1.5]);
});

test("the acceptance region is hatched and outlined, and covers the core's corners", () => {
  const marks = marksOf({ role: "region", kind: "rect", x: -1, y: -2, x2: 3, y2: 1, dashed: true }, 0.1, "h");
  assert.deepEqual(marks.map(({ attributes }) => attributes.class), ["region-ground", "region-hatch", "role-region dashed"]);
  for (const { attributes } of marks) assert.deepEqual([attributes.x, attributes.y, attributes.width, attributes.height], [-1, -1, 4, 3]);
  assert.equal(marksOf({ role: "region", kind: "rect", x: 0, y: 0, x2: 1, y2: 1, empty: true }, 0.1, "h").length, 1);
});

test("the target turns with the axis, against the screen's clockwise sense", () => {
  const marks = marksOf({ role: "target", kind: "crosses", x: 2, y: -1, angle_deg: 20, style: "cross" }, 0.1, "h");
  assert.equal(marks.length, 5);
  for (const mark of marks.slice(1)) assert.equal(mark.attributes.transform, "translate(2 1) rotate(-20)");
  assert.equal(marksOf({ role: "target", kind: "crosses", x: 0, y: 0, angle_deg: 0, style: "dots" }, 0.1, "h").length, 12);
});

test("a prism is shown the way it was written", () => {
  const parts = { "right.prism[0].amount": "1.5", "right.prism[0].base": "up" };
  assert.equal(wayOf(parts, "right.prism"), "parts");
  assert.deepEqual(rowsOf(parts, "right.prism"), [{ index: 1, base: "horizontal" }, { index: 0, base: "vertical" }]);
  assert.equal(wayOf({ "right.prism[0].amount": "4.1", "right.prism[0].base": "217" }, "right.prism"), "base");
  assert.equal(wayOf({ "right.prism[0].base.degrees": "37", "right.prism[0].base.side": "down" }, "right.prism"), "notation");
  const twice = { "right.prism[0].base": "in", "right.prism[1].base": "out" };
  assert.equal(wayOf(twice, "right.prism"), "list");
  assert.equal(rowsOf(twice, "right.prism").length, 3, "one row more than are used");
  assert.equal(wayOf({}, "right.prism"), "parts");
});

test("what the core answers to a touch goes into the rows of its words", () => {
  const draft = { "r.prism[0].amount": "9", "page.way.r.prism": "base", other: "x" };
  putPrism(draft, "r.prism", [{ amount: "0.25", base: "up" }, { amount: "2.75", base: "in" }]);
  assert.deepEqual(draft, { "r.prism[1].amount": "0.25", "r.prism[1].base": "up", "r.prism[0].amount": "2.75", "r.prism[0].base": "in", other: "x" });
});

test("the keypad edits text: signs and quarter endings", () => {
  assert.equal(withSign("2.25", "-"), "-2.25");
  assert.equal(withSign("+2.25", "-"), "-2.25");
  assert.equal(withSign("\u22122.25", "+"), "+2.25");
  assert.equal(withEnding("-2", "25", "."), "-2.25");
  assert.equal(withEnding("-2,50", "75", ","), "-2,75");
  assert.equal(withEnding("", "50", "."), "0.50");
  assert.equal(withEnding("-", "50", "."), "-0.50");
});

test("of the draft slots the newest whole one counts", async () => {
  const digest = async (text) => [...new Uint8Array(await crypto.subtle.digest("SHA-256", new TextEncoder().encode(text)))].map((byte) => byte.toString(16).padStart(2, "0")).join("");
  const whole = { version: 4, entries: { b: "2", a: "1" }, hash: await digest('[["a","1"],["b","2"]]') };
  const torn = { version: 5, entries: { a: "9" }, hash: whole.hash };
  assert.equal((await newestWhole([torn, whole]))?.version, 4);
  assert.equal(await newestWhole([torn]), null);
  assert.equal(await newestWhole([]), null);
});

test("names and times are plain", () => {
  assert.equal(fileName("../T 1/é"), "job-T-1.json");
  assert.equal(fileName(undefined), "job-unnamed.json");
  assert.equal(stamp(new Date(2026, 0, 2, 3, 4)), "2026-01-02 03:04");
});
