// What was typed <-> the job document. The document's shape is the contract's (wedgewright.job/1); numbers stay text.
import assert from "node:assert/strict";
import { test } from "node:test";
import { fromJob, guestJob, hasOrder, nextJob, readJobFile, removeBranch, toJob } from "../../web/app/job.js";

const TYPED = {
  id: " T-1 ",
  state: "mounted",
  "right.sphere": "-2.25",
  "right.prism[0].amount": "3,00",
  "right.prism[0].base": "in",
  "right.prism[1].amount": "1.50",
  "right.prism[1].base": "up",
  "left.partner": "true",
  "left.cylinder": "   ",
  "readings.right.repeats[2].prism[0].amount": "2.75",
  "readings.right.repeats[2].prism[0].base.degrees": "037",
  "readings.right.repeats[2].prism[0].base.side": "down",
  line: "R -2.25",
  "page.way.right.prism": "parts",
};

test("the document holds typed text, trimmed, and nothing that is empty or the page's own", () => {
  assert.deepEqual(toJob(TYPED).job, {
    format: "wedgewright.job/1",
    id: "T-1",
    state: "mounted",
    right: { sphere: "-2.25", prism: [{ amount: "3,00", base: "in" }, { amount: "1.50", base: "up" }] },
    left: { partner: true },
    readings: { right: { repeats: [{ prism: [{ amount: "2.75", base: { degrees: "037", side: "down" } }] }] } },
  });
});

test("a place in the document leads back to the field, also where empty rows were closed up", () => {
  const { job, place } = toJob({ "right.sphere": "+1", "right.prism[1].amount": "1.5", "right.prism[1].base": "up" });
  assert.deepEqual(job.right.prism, [{ amount: "1.5", base: "up" }]);
  assert.equal(place("right.prism[0].amount"), "right.prism[1].amount");
  assert.equal(place("right.prism[0].base"), "right.prism[1].base");
  assert.equal(place("right.prism"), "right.prism");
  assert.equal(place("left.sphere"), "left.sphere", "a field the document does not have yet");
  assert.equal(place("right.axis"), "right.axis");
});

test("a base chosen before its amount says nothing yet, a typed base does", () => {
  assert.deepEqual(toJob({ "right.prism[0].base": "in" }).job, { format: "wedgewright.job/1" });
  assert.deepEqual(toJob({ "right.prism[0].base": "217" }).job.right, { prism: [{ base: "217" }] });
  assert.equal(hasOrder({ "right.prism[0].base": "in" }), false);
});

test("document -> fields -> document is the same document", () => {
  const { job } = toJob(TYPED);
  assert.deepEqual(toJob(fromJob(job)).job, job);
  assert.equal("format" in fromJob(job), false);
  assert.deepEqual(fromJob({ left: null, right: { stated: null, sphere: "+1" } }), { "right.sphere": "+1" });
});

test("a file's JSON numbers keep their digits, and a positive power gets its sign", () => {
  const job = readJobFile('{"right": {"sphere": 0.750, "cylinder": -1.50, "axis": 20, "prism": [{"amount": 3.00, "base": 217}]}}');
  if (fromJob(job)["right.axis"] === undefined) assert.fail("axis lost");
  assert.equal(fromJob(job)["right.cylinder"], "-1.50");
  assert.equal(fromJob(job)["right.sphere"], "+0.750");
  assert.equal(fromJob(job)["right.prism[0].amount"], "3.00");
  assert.equal(fromJob(job)["right.prism[0].base"], "217");
});

test("the next job keeps the bench and its rules, not the order nor the readings", () => {
  const kept = nextJob({ ...TYPED, edition: "iso-21987", "edition_options.x": "y", "instrument.rings": "5", decision_rule: "guarded", demonstration: "true" });
  assert.deepEqual(kept, { edition: "iso-21987", "edition_options.x": "y", "instrument.rings": "5", decision_rule: "guarded" });
});

test("a branch is removed whole, its neighbours stay", () => {
  const draft = { "right.prism[0].amount": "1", "right.prism[10].amount": "2", "right.prismatic": "3", "right.sphere": "+1" };
  removeBranch(draft, "right.prism");
  assert.deepEqual(draft, { "right.prismatic": "3", "right.sphere": "+1" });
});

test("a job from elsewhere brings its own bench, and the next job has this bench again", () => {
  const here = { "right.sphere": "+1", "instrument.compensator": "own-base", edition: "iso-21987" };
  const guest = guestJob(here, { "left.sphere": "-1", "instrument.compensator": "lens-prism" });
  assert.equal(guest["instrument.compensator"], "lens-prism");
  assert.deepEqual(toJob(guest).job, { format: "wedgewright.job/1", left: { sphere: "-1" }, instrument: { compensator: "lens-prism" } });
  const second = guestJob(guest, { "left.sphere": "-2", "instrument.rings": "3" });
  assert.deepEqual(nextJob(second), { "instrument.compensator": "own-base", edition: "iso-21987" });
});
