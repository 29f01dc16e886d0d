/**
 * Asks for the sections after the first answer, one at a time: a keystroke waits behind one section at most. What has been
 * answered is kept by the text of the job: reopening asks nothing again, and what was broken off goes on where it stopped.
 */

/**
 * @typedef {import("./content.js").Section} Section
 * @typedef {import("../types.js").Scene} Scene
 * @typedef {{sections?: Record<string, Section|undefined>, scenes?: Record<string, Record<string, Scene>|undefined>, right?: any, left?: any, [name: string]: any}} SectionReport
 * @typedef {{report: SectionReport, missing: string[]}} Kept
 */

const MOST = 12;
/** Long enough for the next keystroke of a person who types: their answer comes first. */
const PAUSE_MS = 200;

/**
 * A report with one more section, or with a newer answer of it.
 *
 * @param {SectionReport|null} report @param {string} name @param {SectionReport} given
 * @returns {SectionReport}
 */
function withSection(report, name, given) {
  return {
    ...report,
    [name]: given[name],
    sections: { ...report?.sections, [name]: given.sections?.[name] },
    scenes: { ...report?.scenes, [name]: given.scenes?.[name] },
    right: { ...report?.right, [name]: given.right?.[name] },
    left: { ...report?.left, [name]: given.left?.[name] },
  };
}

/**
 * @param {object} tools
 * @param {Pick<import("../types.js").Engine, "ask"|"cancel">} tools.engine
 * @param {string} tools.lane of its questions
 * @param {string[]} tools.names of the sections, in the order of their panels
 * @param {() => string[]} tools.first the sections that are looked at: asked for before the others
 * @param {() => void} tools.changed there is another answer to show
 * @param {number} [tools.pauseMs]
 */
export function createKeeper({ engine, lane, names, first, changed, pauseMs = PAUSE_MS }) {
  /** @type {Map<string, Kept>} the oldest first */
  const kept = new Map();
  /** @type {{key: string, job: unknown, editions: unknown[]}|null} */
  let wanted = null;
  /** @type {SectionReport|null} */
  let shown = null;
  let failed = false;
  /** @type {object|null} the round of questions that is under way */
  let round = null;
  /** @type {ReturnType<typeof setTimeout>|undefined} */
  let timer;

  /** @param {string} key @param {Kept} entry */
  function keep(key, entry) {
    kept.delete(key);
    kept.set(key, entry);
    const oldest = kept.keys().next().value;
    if (kept.size > MOST && oldest !== undefined) kept.delete(oldest);
  }

  async function ask() {
    const asked = wanted;
    if (!asked) return;
    const { key, job, editions } = asked;
    const own = {};
    round = own;
    for (;;) {
      const { report, missing } = kept.get(key) ?? { report: {}, missing: names };
      const name = first().find((open) => missing.includes(open)) ?? missing[0];
      if (name === undefined) break;
      const given = await engine.ask({ do: "report", job, scenes: true, editions, sections: [name] }, { lane });
      const answer = given && !given["errors"] ? /** @type {SectionReport} */ (given) : null;
      if (answer) keep(key, { report: withSection(report, name, answer), missing: missing.filter((other) => other !== name) });
      if (round !== own) return;
      failed = Boolean(given) && !answer;
      if (!answer) break;
      shown = withSection(shown, name, answer);
      changed();
    }
    round = null;
    const entry = kept.get(key);
    if (entry && !entry.missing.length) shown = entry.report;
    changed();
  }

  return {
    /** The sections of the newest job that has them; while they come in, some may still be of the job before. */
    get report() {
      return shown;
    },
    /** Whether all that is shown belongs to the job as it is now. */
    get current() {
      const entry = wanted && kept.get(wanted.key);
      return Boolean(entry && !entry.missing.length && entry.report === shown);
    },
    /** Whether the core could not answer for this job. */
    get failed() {
      return failed;
    },
    /** Gives up what is not begun: a keystroke does not wait behind it. */
    cancel() {
      clearTimeout(timer);
      timer = undefined;
      round = null;
      engine.cancel(lane);
    },
    /** @param {unknown} job @param {unknown[]} editions the job whose sections are to be shown */
    follow(job, editions) {
      const key = JSON.stringify([job, editions.length]);
      if (wanted?.key === key && (this.current || timer || round)) return;
      this.cancel();
      failed = false;
      wanted = { key, job, editions };
      const known = kept.get(key);
      if (known && !known.missing.length) {
        keep(key, known);
        shown = known.report;
        changed();
        return;
      }
      timer = setTimeout(() => {
        timer = undefined;
        ask();
      }, pauseMs);
    },
    /** There is no job, so there is nothing to show. */
    forget() {
      this.cancel();
      wanted = null;
      shown = null;
      changed();
    },
  };
}
