// Undo: keystrokes of one field are one step, at least 50 steps, everything can be undone (house brief: "undo >= 50 steps").
import assert from "node:assert/strict";
import { test } from "node:test";
import { createState } from "../../web/app/state.js";

test("keystrokes in one field are one step; leaving the field ends the step", () => {
  const state = createState();
  for (const text of ["-", "-2", "-2.2", "-2.25"]) state.set("right.sphere", text);
  state.seal();
  state.set("right.sphere", "-2.2");
  state.undo();
  assert.equal(state.entries["right.sphere"], "-2.25");
  state.undo();
  assert.deepEqual(state.entries, {});
  assert.equal(state.canUndo, false);
  state.redo();
  assert.equal(state.entries["right.sphere"], "-2.25");
});

test("more than 50 steps go back", () => {
  const state = createState();
  for (let step = 0; step < 120; step += 1) {
    state.set("right.sphere", `+${step}`);
    state.seal();
  }
  for (let step = 0; step < 119; step += 1) state.undo();
  assert.equal(state.entries["right.sphere"], "+0");
});

test("a whole new job is one step, and a new change drops what could be redone", () => {
  const state = createState();
  state.set("id", "A");
  state.replace({ id: "B" });
  state.undo();
  assert.equal(state.entries.id, "A");
  state.set("id", "C");
  assert.equal(state.canRedo, false);
});

test("who changes a signed job takes the signature away; undo brings it back", () => {
  const state = createState();
  state.set("id", "A");
  state.sign("XY", "2026-01-02 03:04");
  assert.equal(state.entries["signed.initials"], "XY");
  state.set("id", "AB");
  assert.equal(state.entries["signed.initials"], undefined);
  state.undo();
  assert.equal(state.entries["signed.initials"], "XY");
});

test("a recovered draft never overwrites what was typed meanwhile: it is one undo away", () => {
  const state = createState();
  state.set("id", "typed");
  state.recover({ id: "earlier" });
  assert.equal(state.entries.id, "typed");
  state.undo();
  state.undo();
  assert.equal(state.entries.id, "earlier");
  const fresh = createState();
  fresh.recover({ id: "earlier" });
  assert.equal(fresh.entries.id, "earlier");
  assert.equal(fresh.canUndo, false);
});

test("nothing changed is no step and no news", () => {
  const state = createState({ id: "A" });
  let news = 0;
  state.subscribe(() => (news += 1));
  state.set("id", "A");
  assert.equal(news, 0);
  assert.equal(state.canUndo, false);
});
