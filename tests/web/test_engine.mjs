// The worker client: who is answered, who is superseded, and what happens when a worker dies. No Python runs here.
import assert from "node:assert/strict";
import { afterEach, beforeEach, test } from "node:test";
import { gzipSync } from "node:zlib";
import { startEngine } from "../../web/app/engine.js";
import { textOf } from "../../web/build/payload.mjs";
import { createKeeper } from "../../web/app/panels/keeper.js";
import { NAMES } from "../../web/app/section-names.js";

const PROGRAM = "001234567 the program";

/** Stands in for a browser's worker: keeps what it is sent, answers when the test says so. */
class FakeWorker {
  static made = [];
  static refuse = false;

  constructor() {
    if (FakeWorker.refuse) throw new DOMException("refused", "SecurityError");
    this.sent = [];
    this.ended = false;
    FakeWorker.made.push(this);
  }

  static get last() {
    return FakeWorker.made.at(-1);
  }

  get asked() {
    return this.sent.filter((message) => message.kind === "ask").map((message) => ({ id: message.id, ...JSON.parse(message.text) }));
  }

  postMessage(message) {
    this.sent.push(message);
  }

  terminate() {
    this.ended = true;
  }

  say(data) {
    this.onmessage({ data });
  }

  /** Answers the newest question with the `do` of that question. */
  answer() {
    const { id, do: what } = this.asked.at(-1);
    this.say({ kind: "answer", id, text: JSON.stringify({ format: "test", what }) });
  }
}

/** Lets promises and messages that are under way arrive. */
const settle = () => new Promise((resolve) => setTimeout(resolve, 5));

let states;

async function start(options = {}) {
  states = [];
  const engine = startEngine({ onState: (state) => states.push(state), ...options });
  do await settle();
  while (!FakeWorker.refuse && engine.start.why === "" && (FakeWorker.last?.sent.length ?? 0) < 2);
  return engine;
}

/** Says that the worker is ready, with a question waiting so that no warming up is in the way. */
async function startAsked(options) {
  const engine = await start(options);
  const first = engine.ask({ do: "first" }, { lane: "first" });
  FakeWorker.last.say({ kind: "ready" });
  FakeWorker.last.answer();
  await first;
  return engine;
}

beforeEach(() => {
  FakeWorker.made = [];
  FakeWorker.refuse = false;
  globalThis.Worker = FakeWorker;
  globalThis.document = { visibilityState: "hidden", readyState: "complete", documentElement: { dataset: {} } };
  globalThis.wedgewrightEngine = function () {};
  globalThis.wedgewrightWasm = PROGRAM;
  globalThis.wedgewrightSnapshot = textOf(gzipSync("the memory"), "01234567");
  globalThis.wedgewrightPython = "the library";
});

afterEach(() => {
  delete globalThis.Worker;
  delete globalThis.document;
  delete globalThis.location;
});

test("the worker is given both payloads, and what was asked before it was ready is answered", async () => {
  const engine = await start();
  const answer = engine.ask({ do: "early" }, { lane: "a" });
  assert.deepEqual(FakeWorker.last.sent, [
    { kind: "wasm", body: PROGRAM },
    { kind: "snapshot", body: new TextEncoder().encode("the memory") },
  ]);
  FakeWorker.last.say({ kind: "ready" });
  assert.deepEqual(FakeWorker.last.asked, [{ id: 1, format: "wedgewright.request/1", sequence: 1, language: "en", do: "early" }]);
  FakeWorker.last.answer();
  assert.deepEqual(await answer, { format: "test", what: "early" });
  assert.deepEqual(states, ["reading", "starting", "ready"]);
  assert.equal(engine.start.mode, "worker");
});

test("when it is quiet, the first calls are spent on the demonstration, section by section", async () => {
  await start({ quietMs: 1 });
  const worker = FakeWorker.last;
  worker.say({ kind: "ready" });
  assert.deepEqual(worker.asked, [], "not before it is quiet");
  await settle();
  const [{ id, do: what }] = worker.asked;
  assert.equal(what, "demonstration");
  worker.say({ kind: "answer", id, text: JSON.stringify({ job: { id: "DEMO" } }) });
  await settle();
  assert.deepEqual(worker.asked.at(-1).job, { id: "DEMO" });
  let calls = 0;
  for (; worker.asked.at(-1).sections.length === 0 && calls < 100; calls += 1) {
    worker.answer();
    await settle();
  }
  assert.ok(calls > 10, "the report itself until it is quick");
  assert.deepEqual(worker.asked.at(-1).sections, ["layout"]);
});

test("what nobody waits for lets every question pass, and goes when it has been quiet", async () => {
  const engine = await start({ quietMs: 20 });
  const worker = FakeWorker.last;
  const idle = engine.ask({ do: "list-editions" }, { lane: "editions", idle: true });
  worker.say({ kind: "ready" });
  const urgent = engine.ask({ do: "report" }, { lane: "verdict" });
  worker.answer();
  assert.equal((await urgent).what, "report");
  assert.equal(worker.asked.length, 1);
  await new Promise((resolve) => setTimeout(resolve, 40));
  worker.answer();
  assert.equal((await idle).what, "list-editions");
});

test("one question is under way at a time, the newest of a lane wins, and other lanes wait their turn", async () => {
  const engine = await startAsked();
  const worker = FakeWorker.last;
  const running = engine.ask({ do: "one" }, { lane: "verdict" });
  const superseded = engine.ask({ do: "two" }, { lane: "verdict" });
  const other = engine.ask({ do: "other" }, { lane: "line" });
  const newest = engine.ask({ do: "three" }, { lane: "verdict" });
  assert.deepEqual(worker.asked.map(({ do: what }) => what), ["first", "one"]);
  assert.equal(await running, null);
  assert.equal(await superseded, null);
  worker.answer();
  worker.answer();
  assert.equal((await other).what, "other");
  worker.answer();
  assert.equal((await newest).what, "three");
  assert.deepEqual(worker.asked.map(({ do: what }) => what), ["first", "one", "other", "three"]);
});

test("an answer to a question that is no longer under way is dropped", async () => {
  const engine = await startAsked();
  const answer = engine.ask({ do: "now" }, { lane: "a" });
  FakeWorker.last.say({ kind: "answer", id: 1, text: '{"format":"stale"}' });
  FakeWorker.last.answer();
  assert.equal((await answer).what, "now");
});

test("a crash restarts the worker once and asks again; the second crash is said", async () => {
  const engine = await startAsked();
  const [first] = FakeWorker.made;
  const answer = engine.ask({ do: "again" }, { lane: "a" });
  first.onerror({ message: "out of memory" });
  await settle();
  assert.equal(first.ended, true);
  assert.equal(FakeWorker.made.length, 2);
  assert.equal(engine.state, "restarted");
  FakeWorker.last.say({ kind: "ready" });
  FakeWorker.last.answer();
  assert.equal((await answer).what, "again");

  const lost = engine.ask({ do: "lost" }, { lane: "a" });
  const waiting = engine.ask({ do: "waiting" }, { lane: "b" });
  FakeWorker.last.say({ kind: "failed", message: "trap" });
  assert.equal((await lost).errors[0].code, "engine-failed");
  assert.equal((await waiting).errors[0].code, "engine-failed");
  assert.equal((await engine.ask({ do: "later" }, { lane: "a" })).errors[0].code, "engine-failed");
  assert.equal(FakeWorker.made.length, 2);
  assert.deepEqual(states, ["reading", "starting", "ready", "restarted", "ready", "failed"]);
});

test("a question over its time ends the worker; the next one is answered by a new worker", async () => {
  const engine = await startAsked({ timeLimitMs: 20 });
  const [first] = FakeWorker.made;
  const answer = await engine.ask({ do: "endless" }, { lane: "a" });
  assert.equal(answer.errors[0].code, "engine-time-limit");
  assert.equal(first.ended, true);
  const next = engine.ask({ do: "next" }, { lane: "a" });
  await settle();
  FakeWorker.last.say({ kind: "ready" });
  FakeWorker.last.answer();
  assert.equal((await next).what, "next");
});

test("where workers are refused, the engine runs on the page's own thread", async () => {
  FakeWorker.refuse = true;
  globalThis.wedgewrightEngine = (port) => {
    port.onmessage = ({ data }) => {
      if (data.kind === "snapshot") port.postMessage({ kind: "ready" });
      if (data.kind === "ask") port.postMessage({ kind: "answer", id: data.id, text: '{"format":"here"}' });
    };
  };
  const engine = await start();
  assert.deepEqual(await engine.ask({ do: "report" }, { lane: "a" }), { format: "here" });
  assert.equal(engine.start.mode, "main-thread");
});

test("a question that has not begun can be taken back; one that is being answered goes on", async () => {
  const engine = await startAsked();
  const running = engine.ask({ do: "running" }, { lane: "a" });
  const waiting = engine.ask({ do: "waiting" }, { lane: "b" });
  const newest = engine.ask({ do: "newest" }, { lane: "c" });
  engine.cancel("a");
  engine.cancel("b");
  engine.cancel("nobody's");
  assert.equal(await waiting, null);
  FakeWorker.last.answer();
  assert.equal((await running).what, "running");
  assert.equal(FakeWorker.last.asked.at(-1).do, "newest", "what was taken back is never sent");
  FakeWorker.last.answer();
  assert.equal((await newest).what, "newest");
});

test("a keystroke waits behind one section at most", async () => {
  const engine = await startAsked();
  const worker = FakeWorker.last;
  const keeper = createKeeper({ lane: "sections", engine, names: NAMES, first: () => [], changed: () => {}, pauseMs: 1 });
  keeper.follow({ id: "a" }, []);
  await settle();
  assert.deepEqual(worker.asked.at(-1).sections, ["layout"]);
  worker.answer();
  await settle();
  assert.deepEqual(worker.asked.at(-1).sections, ["field"], "a section is under way");
  const keystroke = engine.ask({ do: "report", sections: [] }, { lane: "verdict" });
  worker.answer();
  assert.deepEqual(worker.asked.at(-1).sections, [], "it comes next, before the sections that are left");
  worker.answer();
  assert.ok(await keystroke);
  await settle();
  assert.deepEqual(worker.asked.at(-1).sections, [NAMES[2]], "then they go on");
});

const LIBRARY = [
  { kind: "wasm", body: PROGRAM },
  { kind: "python", body: "the library" },
];

test("an engine that does not start from the kept memory starts from the library, and says why", async () => {
  const engine = await start();
  const answer = engine.ask({ do: "early" }, { lane: "a" });
  const [first] = FakeWorker.made;
  first.say({ kind: "failed", message: "Snapshot build id mismatch" });
  await settle();
  assert.equal(first.ended, true);
  assert.deepEqual(FakeWorker.last.sent, LIBRARY);
  FakeWorker.last.say({ kind: "ready" });
  FakeWorker.last.answer();
  assert.equal((await answer).what, "early");
  assert.deepEqual(engine.start, { mode: "worker", source: "python", why: "failed" });
  assert.deepEqual(states, ["reading", "starting", "ready"], "nobody was told of a crash");
});

test("a kept memory that takes too long is given up for the library", async () => {
  const engine = await start({ startLimitsMs: { snapshot: 10, python: 60_000 } });
  while (FakeWorker.made.length < 2 || FakeWorker.last.sent.length < 2) await settle();
  assert.equal(FakeWorker.made.length, 2);
  assert.deepEqual(FakeWorker.last.sent, LIBRARY);
  assert.equal(engine.start.why, "slow");
});

test("a kept memory that is not there is given up for the library", async () => {
  delete globalThis.wedgewrightSnapshot;
  const engine = await start();
  assert.deepEqual(FakeWorker.last.sent, LIBRARY);
  assert.equal(engine.start.why, "failed");
});

test("a kept memory of another program is given up for the library", async () => {
  globalThis.wedgewrightSnapshot = textOf(gzipSync("the memory"), "89abcdef");
  const engine = await start();
  while (engine.start.source !== "python" || FakeWorker.last.sent.length < 2) await settle();
  assert.deepEqual(FakeWorker.last.sent, LIBRARY);
  assert.equal(engine.start.why, "failed");
});

test("a crash after a start from the kept memory leads to the library too", async () => {
  const engine = await startAsked();
  FakeWorker.last.onerror({ message: "table index is out of bounds" });
  await settle();
  assert.deepEqual(FakeWorker.last.sent, LIBRARY);
  assert.deepEqual(engine.start, { mode: "worker", source: "python", why: "failed" });
  assert.equal(engine.state, "restarted");
});

test("the library can be asked for by the page's address", async () => {
  globalThis.location = new URL("file:///index.html#library");
  const engine = await start();
  assert.deepEqual(FakeWorker.last.sent, LIBRARY);
  assert.equal(engine.start.why, "asked");
});
