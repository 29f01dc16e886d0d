/** Asks for the sections after the first answer, and keeps them by the text of the job: reopening asks nothing again. */

/**
 * @typedef {import("./content.js").Section} Section
 * @typedef {import("../types.js").Scene} Scene
 * @typedef {{sections?: Record<string, Section>, scenes?: Record<string, Record<string, Scene>>, right?: any, left?: any}} SectionReport
 */

const LANE = "sections";
const MOST = 12;
/** Long enough for the next keystroke of a person who types: their answer comes first. */
const PAUSE_MS = 200;

/**
 * @param {object} tools
 * @param {Pick<import("../types.js").Engine, "ask"|"cancel">} tools.engine
 * @param {() => void} tools.changed there is another answer to show
 * @param {number} [tools.pauseMs]
 */
export function createKeeper({ engine, changed, pauseMs = PAUSE_MS }) {
  /** @type {Map<string, SectionReport>} the oldest first */
  const kept = new Map();
  /** @type {{key: string, job: unknown, editions: unknown[]}|null} */
  let wanted = null;
  /** @type {SectionReport|null} */
  let shown = null;
  let failed = false;
  let asking = "";
  /** @type {ReturnType<typeof setTimeout>|undefined} */
  let timer;

  /** @param {string} key @param {SectionReport} report */
  function keep(key, report) {
    kept.delete(key);
    kept.set(key, report);
    const oldest = kept.keys().next().value;
    if (kept.size > MOST && oldest !== undefined) kept.delete(oldest);
  }

  async function ask() {
    const asked = wanted;
    if (!asked) return;
    const { key, job, editions } = asked;
    asking = key;
    const given = await engine.ask({ do: "report", job, scenes: true, editions }, { lane: LANE });
    if (asking === key) asking = "";
    if (!given) return;
    const report = given["errors"] ? null : /** @type {SectionReport} */ (given);
    if (report) keep(key, report);
    if (wanted?.key !== key) return;
    failed = !report;
    if (report) shown = report;
    changed();
  }

  return {
    /** The sections of the newest job that has them. */
    get report() {
      return shown;
    },
    /** Whether what is shown belongs to the job as it is now. */
    get current() {
      return Boolean(wanted && shown && kept.get(wanted.key) === shown);
    },
    /** Whether the core could not answer for this job. */
    get failed() {
      return failed;
    },
    /** Gives up what is not begun: a keystroke does not wait behind it. */
    cancel() {
      clearTimeout(timer);
      timer = undefined;
      engine.cancel(LANE);
    },
    /** @param {unknown} job @param {unknown[]} editions the job whose sections are to be shown */
    follow(job, editions) {
      const key = JSON.stringify([job, editions.length]);
      if (wanted?.key === key && (shown === kept.get(key) || timer || asking === key)) return;
      this.cancel();
      failed = false;
      wanted = { key, job, editions };
      const known = kept.get(key);
      if (known) {
        keep(key, known);
        shown = known;
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
