// The panels' own decisions, without a document: lists out of pasted text, points, marks, scale, and which answer is kept.
import assert from "node:assert/strict";
import { test } from "node:test";
import { toJob } from "../../web/app/job.js";
import { createKeeper } from "../../web/app/panels/keeper.js";
import { marksOf } from "../../web/app/panels/marks.js";
import { putRadii, radiiIn, radiiOf } from "../../web/app/panels/outline.js";
import { commonSize, viewOf } from "../../web/app/panels/picture.js";
import { pointRows, putPoint } from "../../web/app/panels/points.js";

const PICTURE = { middle: { x: 0, y: 0 }, hatch: "h" };

test("a pasted list of radii is parted as it was written, and stays text", () => {
  assert.deepEqual(radiiOf(" 25.30 25.1\n24.9\t"), ["25.30", "25.1", "24.9"]);
  assert.deepEqual(radiiOf("25.3,25.1,24.9"), ["25.3", "25.1", "24.9"]);
  assert.deepEqual(radiiOf("25,3; 25,1;24,9"), ["25,3", "25,1", "24,9"]);
  assert.deepEqual(radiiOf("25,3, 25,1"), ["25,3", "25,1"]);
  assert.deepEqual(radiiOf("  "), []);
});

test("the list goes into the document as a list, and a shorter one leaves nothing behind", () => {
  const draft = { "frame.a_mm": "52" };
  putRadii(draft, "25.3 25.1 24.9");
  assert.deepEqual(toJob(draft).job.frame, { a_mm: "52", outline_mm: ["25.3", "25.1", "24.9"] });
  putRadii(draft, "26");
  assert.deepEqual(radiiIn(draft), ["26"]);
  assert.deepEqual(toJob(draft).job.frame, { a_mm: "52", outline_mm: ["26"] });
});

test("a touch adds a point behind those there are; one row is always free", () => {
  const draft = { "points.right[0].right_mm": "1", "points.right[0].up_mm": "2", "points.right[3].up_mm": "5" };
  assert.deepEqual(pointRows(draft, "right"), [0, 3, 4]);
  putPoint(draft, "right", { x: "-3.5", y: "4.0" });
  putPoint(draft, "left", { x: "0.5", y: "0.0" });
  assert.deepEqual(toJob(draft).job.points, {
    right: [{ right_mm: "1", up_mm: "2" }, { up_mm: "5" }, { right_mm: "-3.5", up_mm: "4.0" }],
    left: [{ right_mm: "0.5", up_mm: "0.0" }],
  });
  for (let index = 0; index < 250; index += 1) putPoint(draft, "left", { x: "1", y: "1" });
  assert.equal(toJob(draft).job.points.left.length, 200, "the contract's limit");
  assert.equal(pointRows(draft, "left").length, 200, "no free row beyond it");
});

test("the core's y goes up, the screen's down, whatever the kind", () => {
  const shapes = [
    [{ kind: "circle", x: 1, y: 2, radius: 3 }, "cy", -2],
    [{ kind: "line", x: 0, y: 0, x2: 3, y2: 1.5 }, "y2", -1.5],
    [{ kind: "rect", x: 0, y: 0, x2: 3, y2: 4 }, "y", -4],
    [{ kind: "polygon", points: [[1, 2], [3, -4]] }, "points", "1,-2 3,4"],
    [{ kind: "polyline", points: [[1, 2], [3, -4]] }, "points", "1,-2 3,4"],
    [{ kind: "label", x: 1, y: 2, text: "a" }, "y", -2],
    [{ kind: "point", x: 1, y: 2 }, "cy", -2],
  ];
  for (const [shape, name, expected] of shapes) {
    const [mark] = marksOf({ role: "r", ...shape }, 0.1, PICTURE);
    assert.equal(mark.attributes[name], expected, shape.kind);
  }
});

test("an arrow's head points where the arrow goes; too short for one it is a dot", () => {
  const [line, head] = marksOf({ role: "arrow", kind: "arrow", x: 0, y: 0, x2: 0, y2: 10 }, 0.1, PICTURE);
  const corners = head.attributes.points.split(" ").map((corner) => corner.split(",").map(Number));
  assert.deepEqual(corners[0], [0, -10], "its tip is the end");
  assert.ok(corners.slice(1).every(([, y]) => y > -10 && y < 0), "its foot lies behind the tip, y down");
  assert.equal(Math.sign(corners[1][0]), -Math.sign(corners[2][0]), "on both sides of the line");
  assert.ok(line.attributes.y2 > -10, "the line ends at the head");
  assert.equal(marksOf({ role: "arrow", kind: "arrow", x: 1, y: 1, x2: 1.05, y2: 1 }, 0.1, PICTURE)[0].tag, "circle");
});

test("each place has a shape of its own, not only a colour", () => {
  const roles = ["prp", "oc", "pupil", "boxing-centre", "cross", "asked", "reading-point", "thickest", "thinnest"];
  const looks = roles.map((role) =>
    JSON.stringify(marksOf({ role, kind: "point", x: 0, y: 0 }, 0.1, PICTURE).map(({ tag, attributes }) => [tag, { ...attributes, class: / solid/.test(attributes.class) }])),
  );
  assert.equal(new Set(looks).size, roles.length);
});

test("both lenses are drawn to one scale, each in the middle of its picture", () => {
  const small = { unit: "mm", extent: [-10, -5, 10, 5], shapes: [] };
  const large = { unit: "mm", extent: [-20, -15, 40, 25], shapes: [] };
  const size = commonSize([small, large]);
  assert.deepEqual(size, [60, 40]);
  assert.deepEqual(viewOf(small, size, 0), [-30, -20, 60, 40]);
  assert.deepEqual(viewOf(large, size, 0), [-20, -25, 60, 40]);
  assert.equal(viewOf(large, size, 0.1)[2], 60, "the bar takes height, not width");
});

/** An engine whose answers are given by hand. */
function slowEngine() {
  const asked = [];
  return {
    asked,
    cancelled: 0,
    ask(request) {
      return new Promise((resolve) => asked.push({ request, resolve }));
    },
    cancel() {
      this.cancelled += 1;
    },
  };
}
const pause = (ms) => new Promise((resolve) => setTimeout(resolve, ms));
const LAYOUT = { names: ["layout"], first: () => [] };
const answerOf = (name) => ({ format: "wedgewright.report/1", sections: { layout: { name } } });

test("sections are asked for once a job: going back to it asks nothing again", async () => {
  const engine = slowEngine();
  let changes = 0;
  const keeper = createKeeper({ lane: "sections", engine, ...LAYOUT, changed: () => (changes += 1), pauseMs: 1 });
  keeper.follow({ id: "a" }, []);
  keeper.follow({ id: "a" }, []);
  await pause(10);
  assert.equal(engine.asked.length, 1);
  keeper.follow({ id: "a" }, []);
  await pause(10);
  assert.equal(engine.asked.length, 1, "not while it is being answered either");
  engine.asked[0].resolve(answerOf("a"));
  await pause(1);
  assert.deepEqual([keeper.report.sections.layout.name, keeper.current, changes], ["a", true, 2]);

  keeper.follow({ id: "b" }, []);
  assert.equal(keeper.current, false, "the answer shown is that of the job before");
  await pause(10);
  engine.asked[1].resolve(answerOf("b"));
  await pause(1);
  keeper.follow({ id: "a" }, []);
  assert.deepEqual([keeper.report.sections.layout.name, keeper.current], ["a", true], "there at once");
  await pause(10);
  assert.equal(engine.asked.length, 2);
});

test("a keystroke takes the question back, and a late answer never covers a newer one", async () => {
  const engine = slowEngine();
  const keeper = createKeeper({ lane: "sections", engine, ...LAYOUT, changed: () => {}, pauseMs: 5 });
  keeper.follow({ id: "a" }, []);
  keeper.cancel();
  await pause(15);
  assert.equal(engine.asked.length, 0);
  keeper.follow({ id: "a" }, []);
  await pause(15);
  keeper.follow({ id: "b" }, []);
  await pause(15);
  assert.equal(engine.asked.length, 2);
  engine.asked[1].resolve(answerOf("b"));
  engine.asked[0].resolve(answerOf("a"));
  await pause(1);
  assert.equal(keeper.report.sections.layout.name, "b");
  assert.equal(keeper.current, true);
});

test("a job that the core cannot answer keeps what was there, said as earlier", async () => {
  const engine = slowEngine();
  const keeper = createKeeper({ lane: "sections", engine, ...LAYOUT, changed: () => {}, pauseMs: 1 });
  keeper.follow({ id: "a" }, []);
  await pause(10);
  engine.asked[0].resolve(answerOf("a"));
  await pause(1);
  keeper.follow({ id: "b" }, []);
  await pause(10);
  engine.asked[1].resolve({ errors: [{ code: "internal" }] });
  await pause(1);
  assert.deepEqual([keeper.report.sections.layout.name, keeper.current, keeper.failed], ["a", false, true]);
});

/** The one section that an asked question is about, and an answer to it. */
const sectionOf = ({ request }) => request.sections[0];
const sectionAnswer = (name, job) => ({ sections: { [name]: { job } }, scenes: { [name]: { pair: job } }, right: { power: 1, [name]: job } });

test("sections are asked one at a time, what is looked at first; each is shown as it comes", async () => {
  const engine = slowEngine();
  const keeper = createKeeper({ lane: "sections", engine, names: ["layout", "edge", "near"], first: () => ["near"], changed: () => {}, pauseMs: 1 });
  keeper.follow({ id: "a" }, []);
  for (const [index, name] of ["near", "layout", "edge"].entries()) {
    await pause(5);
    assert.deepEqual(engine.asked.map(sectionOf).slice(index), [name], "the next only when the one before is answered");
    assert.equal(keeper.current, false);
    engine.asked[index].resolve(sectionAnswer(name, "a"));
  }
  await pause(1);
  assert.equal(keeper.current, true);
  assert.deepEqual(Object.keys(keeper.report.sections).sort(), ["edge", "layout", "near"]);
  assert.deepEqual(keeper.report.right, { near: "a", layout: "a", edge: "a" });
});

test("broken off by a keystroke, the rest is asked later and what was answered is not asked again", async () => {
  const engine = slowEngine();
  const keeper = createKeeper({ lane: "sections", engine, names: ["layout", "edge"], first: () => [], changed: () => {}, pauseMs: 1 });
  keeper.follow({ id: "a" }, []);
  await pause(5);
  keeper.cancel();
  engine.asked[0].resolve(sectionAnswer("layout", "a"));
  await pause(5);
  assert.equal(engine.asked.length, 1, "nothing more is asked");
  keeper.follow({ id: "a" }, []);
  await pause(5);
  assert.deepEqual(engine.asked.map(sectionOf), ["layout", "edge"]);
  engine.asked[1].resolve(sectionAnswer("edge", "a"));
  await pause(1);
  assert.equal(keeper.current, true);
  assert.deepEqual(keeper.report.scenes, { layout: { pair: "a" }, edge: { pair: "a" } });
});
