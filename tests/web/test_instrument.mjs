// The check of the lens meter, as the page keeps it: what was seen, what it settles, and when it grows old.
import assert from "node:assert/strict";
import { test } from "node:test";
import { isOld } from "../../web/app/bench-record.js";
import { marksOf } from "../../web/app/dial.js";
import { looksOf } from "../../web/app/instrument-check.js";
import { guestJob, nextJob, settleBench, toJob } from "../../web/app/job.js";

const SEEN = {
  "right.sphere": "-2.00",
  "page-check.begun": "true",
  "page-check.zero.x": "0",
  "page-check.zero.y": "0",
  "page-check.known.amount": "3",
  "page-check.known.base": "40",
  "page-check.seen[0].x": "2.25",
  "page-check.seen[0].y": "2",
  "page-check.seen[2].x": "2.50",
  "page-check.seen[2].y": "2",
};

test("what was seen goes to the core as text, dropped places closed up, and is no part of the job", () => {
  assert.deepEqual(looksOf(SEEN), {
    zero: { x: "0", y: "0" },
    known: { amount: "3", base: "40" },
    seen: [
      { x: "2.25", y: "2" },
      { x: "2.50", y: "2" },
    ],
  });
  assert.deepEqual(toJob(SEEN).job, { format: "wedgewright.job/1", right: { sphere: "-2.00" } });
});

test("what the check settles belongs to the bench, also while a job from elsewhere lies on it", () => {
  const settled = { "instrument.compensator": "own-base", "instrument.mirrored": "false" };
  const own = { "right.sphere": "-1.00", "instrument.rings": "4" };
  settleBench(own, settled);
  assert.deepEqual(nextJob(own), { "instrument.rings": "4", ...settled });
  assert.equal(toJob(own).job.instrument.mirrored, undefined, "a flag that is not set is left out");
  const guest = guestJob({ "instrument.rings": "4" }, { "right.sphere": "-2.00", "instrument.rings": "5" });
  settleBench(guest, settled);
  assert.equal(guest["instrument.compensator"], "own-base");
  assert.deepEqual(nextJob(guest), { "instrument.rings": "4", ...settled });
});

test("a check is old after 90 days", () => {
  const now = new Date("2026-12-01T12:00");
  assert.equal(isOld("2026-09-03 11:00", now), false);
  assert.equal(isOld("2026-09-01 11:00", now), true);
});

test("the mean of several readings has a mark of its own, and the large target is larger", () => {
  const [mean] = marksOf({ role: "mean", kind: "point", x: 1, y: 2 }, 0.1, "h");
  assert.equal(mean.tag, "path");
  assert.match(mean.attributes.d, /^M1 -2\.22/);
  const shape = { role: "target", kind: "crosses", x: 0, y: 0, angle_deg: 0 };
  const [, small] = marksOf(shape, 0.1, "h");
  const [, large] = marksOf(shape, 0.1, "h", 2);
  assert.equal(large.attributes.x2, 2 * small.attributes.x2);
});
