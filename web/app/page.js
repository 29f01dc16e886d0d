/** Joins the parts: state to form, form to engine, answer to pictures. One way round, no return. */

import { demonstration } from "./demonstration.js";
import { watchDock } from "./dock.js";
import { byId, el, redraw } from "./dom.js";
import { copyText } from "./files.js";
import { shopEditions } from "./editions.js";
import { createForm } from "./form.js";
import { frame } from "./frame.js";
import { createImagine } from "./imagine.js";
import { guestJob, hasOrder, nextJob, toJob } from "./job.js";
import { jobFiles } from "./job-files.js";
import { hashOf, keepDraft, stamp } from "./keeping.js";
import { createKeypad } from "./keypad.js";
import { listenToKeys, moveOn } from "./keys.js";
import { languageOf } from "./language.js";
import { orderLine } from "./order-line.js";
import { drawSheet } from "./print.js";
import { applyLook, eraseSettings, saveSettings } from "./settings.js";
import { createState } from "./state.js";
import { createSteps } from "./steps.js";
import { serverFollower } from "./served.js";
import { openStore } from "./store.js";
import { outcomeOf, sentenceOf, verdictStrip } from "./verdict.js";
import { benchView } from "./views/bench.js";
import { decideView } from "./views/decide.js";
import { keepView } from "./views/keep.js";
import { layoutView } from "./views/layout.js";
import { orderView } from "./views/order.js";
import { readView } from "./views/read.js";
import { say, writeWith } from "./words.js";

/**
 * @typedef {import("./types.js").Report} Report
 * @typedef {import("./types.js").Fault} Fault
 * @typedef {import("./keeping.js").KeptJob} KeptJob
 */

/**
 * @param {typeof import("./engine.js").startEngine} startEngine
 * @param {import("./settings.js").Settings} settings
 */
export function startPage(startEngine, settings) {
  const root = document.documentElement;
  applyLook(settings);
  writeWith(settings);

  const state = createState();
  const form = createForm(state);
  /** @type {import("./verdict.js").Standing} */
  const standing = { report: null, faults: [], earlier: false, begun: false, engine: "reading" };
  let place = toJob({}).place;
  /** @type {ReturnType<typeof verdictStrip>|null} */
  let foot = null;
  let hash = "";
  /** @type {Record<string, string>} */
  let understood = {};
  /** @type {ReturnType<typeof frame>|null} */
  let head = null;
  /** @type {import("./store.js").Store|null} */
  let store = null;

  const engine = startEngine({
    onState(code) {
      root.dataset["engine"] = code;
      standing.engine = code;
      if (head) showStart();
      foot?.draw(standing);
      if (code === "ready") server.follow();
    },
  });
  const server = serverFollower({ state, unsaved: () => head?.saving ?? false });
  const steps = createSteps(engine, state, (faults) => refuse(faults));
  const line = orderLine({ engine, state, settings });
  const invented = demonstration({ engine, state, refuse, loaded: () => head?.show("read"), host: byId("banner") });
  const demonstrate = invented.load;
  const imagine = createImagine({ engine, state, refuse, draw, show: () => head?.show("read") });
  const editions = shopEditions({ engine, listed: editionsListed });
  const views = {
    order: orderView({ form, state, line: line.node, demonstrate, reopen }),
    layout: layoutView({ form, state, engine, goTo }),
    read: readView({ form, state, steps, settings, imagine }),
    decide: decideView({ form, state, engine, goTo, imagine: imagine.ask, sign, print: () => window.print(), copy }),
    keep: keepView({ newJob, demonstrate, ...jobFiles(state), copy, print: () => window.print(), reopen }),
    bench: benchView({ form, state, engine, settings, settingsChanged, erase, editions }),
  };
  const keypad = createKeypad({ settings, next: moveOn, setBase });
  const top = frame({ state, views, settings, toggleKeypad, drawView });
  head = top;
  const strip = verdictStrip({ show: top.show, goTo });
  foot = strip;
  showStart();

  function showStart() {
    head?.engine(engine.state, engine.start);
    if (engine.state === "ready") views.bench.started(engine.start);
  }

  function toggleKeypad() {
    keypad.toggle();
    saveSettings(settings);
    top.keypad();
  }

  function draw() {
    form.answer({ echo: echoes(), faults: standing.faults });
    drawView(settings.view);
    strip.draw(standing);
    top.draw();
    invented.draw();
    top.queries(
      (standing.report?.notes ?? []).filter(({ about, severity }) => about === "order" && severity === "warning").length,
    );
    root.dataset["earlier"] = String(standing.earlier);
    performance.mark("dial-drawn");
  }

  /** @param {string} name only what is seen is drawn; the others are when they are shown */
  function drawView(name) {
    const view = views[/** @type {keyof typeof views} */ (name)];
    if (view && "draw" in view) view.draw(name === "read" ? imagine.applied(standing) : standing);
  }

  /** @returns {Record<string, string>} what was understood, by the page's own places */
  function echoes() {
    return Object.fromEntries(Object.entries(understood).map(([path, text]) => [place(path), text]));
  }

  /** @param {Fault[]} faults those of a touch or step that could not be carried out */
  function refuse(faults) {
    standing.faults = faults.map((fault) => ({ ...fault, field: place(fault.field) }));
    draw();
  }

  async function answer() {
    standing.begun = hasOrder(state.entries);
    if (!standing.begun) {
      Object.assign(standing, { report: null, faults: [], earlier: false });
      understood = {};
      draw();
      return;
    }
    if (!standing.report) strip.draw(standing);
    top.draw();
    const built = toJob(state.entries);
    const given = await engine.ask(
      { do: "report", job: built.job, sections: [], scenes: true, editions: editions.all },
      { lane: "verdict" },
    );
    if (!given) return;
    place = built.place;
    understood = given["echo"] ?? {};
    const faults = /** @type {Fault[]} */ (given["errors"] ?? []);
    standing.faults = faults.map((fault) => ({ ...fault, field: place(fault.field) }));
    standing.earlier = faults.length > 0 && standing.report !== null;
    if (!faults.length) standing.report = /** @type {Report} */ (/** @type {unknown} */ (given));
    draw();
    editions.listOnce();
    for (const view of [views.layout, views.decide]) view.follow(standing, editions.all);
    root.dataset["drawn"] = String(given.sequence ?? "");
    if (!performance.getEntriesByName("first-answer").length && !faults.length) performance.mark("first-answer");
    hash = await hashOf(JSON.stringify(built.job));
  }

  state.subscribe((entries) => {
    form.show(entries);
    answer();
  });

  /** @param {any[]} list every edition there is, the shop's own last */
  function editionsListed(list) {
    views.order.useEditions(list);
    views.bench.showEditions(list.filter(({ provenance }) => provenance.includes("local")));
    if (state.entries["edition"]) answer();
  }

  function newJob() {
    server.update();
    state.replace(nextJob(state.entries));
    top.show("order");
    byId("f-id").focus();
  }

  async function copy() {
    const given = await engine.ask(
      { do: "report", job: toJob(state.entries).job, sections: [], text: true, editions: editions.all },
      { lane: "text" },
    );
    const text = given?.["text"];
    if (!text) return;
    const taken = await copyText(text);
    const area = el("textarea", { id: "f-copied", readonly: true, rows: 12 });
    area.value = text;
    views.keep.copied.hidden = false;
    redraw(
      views.keep.copied,
      el("label", { for: "f-copied" }, say(taken ? "page.keep.copied" : "page.keep.copy_by_hand")),
      area,
    );
    if (taken) return;
    top.show("keep");
    area.focus();
    area.select();
  }

  /** @param {string} initials */
  function sign(initials) {
    const at = stamp(new Date());
    state.sign(initials, at);
    const { entries } = state;
    /** @type {KeptJob} */
    const kept = {
      key: `${at} ${entries["id"] ?? ""}`,
      id: entries["id"] ?? "",
      at,
      initials,
      outcome: outcomeOf(standing),
      sentence: sentenceOf(standing),
      edition: standing.report?.verdict?.edition.name ?? "",
      entries,
    };
    store?.put("jobs", kept.key, kept).then(showJobs, () => top.saved(store?.newer ? "newer" : "off"));
  }

  async function showJobs() {
    const jobs = /** @type {KeptJob[]} */ ((await store?.all("jobs")) ?? []).reverse();
    views.keep.showJobs(jobs);
    views.order.showJobs(jobs);
  }

  /** @param {KeptJob} job */
  function reopen(job) {
    state.replace(guestJob(state.entries, job.entries));
    top.show("read");
  }

  async function erase() {
    await store?.erase().catch(() => {});
    eraseSettings();
    location.reload();
  }

  function settingsChanged() {
    saveSettings(settings);
    applyLook(settings);
    writeWith(settings);
    keypad.refresh();
    top.keypad();
    line.ask();
    draw();
    if (languageOf(settings) !== root.lang) top.openAnew();
  }

  /** @param {string} path leads to the field that is to be mended */
  function goTo(path) {
    const control = form.nearest(path);
    if (!control) return;
    const name = Object.entries(views).find(([, view]) => view.node.contains(control.node))?.[0];
    if (name) top.show(name);
    views.read.reveal(control.node);
    for (let node = control.node.parentElement; node; node = node.parentElement)
      {if (node instanceof HTMLDetailsElement) node.open = true;}
    control.node.scrollIntoView({ block: "center" });
    control.focus.focus();
  }

  /** @param {HTMLInputElement} from @param {string} base the base of the prism whose field is in use */
  function setBase(from, base) {
    const row = (from.dataset["path"] ?? "").replace(/\.(amount|base.*)$/, "");
    state.set(`${row}.base`, base);
  }

  window.addEventListener("beforeprint", () =>
    drawSheet(byId("sheet"), { standing, entries: state.entries, hash, at: stamp(new Date()), sections: [views.decide.sheet(), views.layout.sheet()] }),
  );
  listenToKeys({ state });
  watchDock();

  openStore()
    .then(async (opened) => {
      store = opened;
      await editions.open(opened);
      showJobs();
      await keepDraft(state, opened, top.saved);
      await views.bench.openStore(opened);
    })
    .catch(() => top.saved("off"));

  editions.list({ idle: true });
  top.show(settings.view);
  draw();
  keypad.refresh();
}
