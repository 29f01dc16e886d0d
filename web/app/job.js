/** Typed text by path <-> the job document. Text only: nothing here knows a number. */

/** @typedef {import("./types.js").Entries} Entries */

export const FORMAT = "wedgewright.job/1";
const FLAGS = new Set(["partner", "aspheric", "includes_thinning", "demonstration", "drilled", "mirrored"]);
const SIGNED = new Set(["sphere", "cylinder"]);
const WORDS = new Set(["in", "out", "up", "down"]);
/** What stays when the next job is begun: the bench and its rules, not the order. */
const BENCH = /^(instrument|edition|edition_options|decision_rule)\b/;
const GUEST = "page-guest";
const ASIDE = "page-bench.";
/** What the page keeps beside the job: the line being typed, the way a prism is written. */
const PAGE_ONLY = /^(line|page)\b/;

/** @param {string} path @returns {(string|number)[]} */
export function steps(path) {
  return path
    .split(/[.[\]]+/)
    .filter(Boolean)
    .map((step) => (/^\d+$/.test(step) ? Number(step) : step));
}

/** @param {string} prefix @param {string|number} step */
function join(prefix, step) {
  if (typeof step === "number") return `${prefix}[${step}]`;
  return prefix ? `${prefix}.${step}` : step;
}

/**
 * A base that was chosen before its amount says nothing yet.
 *
 * @param {Entries} entries
 * @param {string} path
 */
function isLoneBase(entries, path) {
  const match = /^(.*)\.base(\.side)?$/.exec(path);
  if (!match || entries[`${match[1]}.amount`]?.trim()) return false;
  return match[2] ? !entries[`${match[1]}.base.degrees`]?.trim() : WORDS.has(entries[path] ?? "");
}

/** @param {Entries} entries @returns {[string, string][]} what was typed, trimmed, empty fields left out */
function typed(entries) {
  const all = /** @type {[string, string][]} */ (Object.entries(entries).map(([path, text]) => [path, text.trim()]));
  return all.filter(([path, text]) => text && text !== "false" && !PAGE_ONLY.test(path) && !isLoneBase(entries, path));
}

/**
 * The job document out of what was typed. Rows left empty are closed up, so a place in the document
 * may be another one on the page: `place` leads back.
 *
 * @param {Entries} entries
 * @returns {{job: Record<string, unknown>, place: (field: string) => string}}
 */
export function toJob(entries) {
  const kept = typed(entries);
  /** @type {Map<string, number[]>} */
  const rows = new Map();
  for (const [path] of kept) {
    let prefix = "";
    for (const step of steps(path)) {
      if (typeof step === "number") {
        const used = rows.get(prefix) ?? [];
        if (!used.includes(step))
          {rows.set(
            prefix,
            [...used, step].sort((a, b) => a - b),
          );}
      }
      prefix = join(prefix, step);
    }
  }
  /** @type {Record<string, unknown>} */
  const job = { format: FORMAT };
  /** @type {Map<string, string>} */
  const places = new Map();
  for (const [path, text] of kept) put(job, path, text, rows, places);
  return { job, place: (field) => leadBack(field, places) };
}

/**
 * @param {Record<string, unknown>} job
 * @param {string} path
 * @param {string} text
 * @param {Map<string, number[]>} rows
 * @param {Map<string, string>} places
 */
function put(job, path, text, rows, places) {
  /** @type {any} */
  let node = job;
  let here = "";
  let there = "";
  const all = steps(path);
  all.forEach((step, index) => {
    const row = typeof step === "number" ? (rows.get(here) ?? []).indexOf(step) : step;
    here = join(here, step);
    there = join(there, row);
    places.set(there, here);
    if (index === all.length - 1) node[row] = FLAGS.has(String(step)) ? text === "true" : text;
    else node = node[row] ??= typeof all[index + 1] === "number" ? [] : {};
  });
}

/** @param {string} field @param {Map<string, string>} places */
function leadBack(field, places) {
  let known = field;
  while (known && !places.has(known)) known = known.replace(/(\.[^.[\]]+|\[\d+\]|^[^.[\]]+)$/, "");
  return known ? places.get(known) + field.slice(known.length) : field;
}

/**
 * What the page shows of a job document.
 *
 * @param {unknown} job
 * @returns {Entries}
 */
export function fromJob(job) {
  /** @type {Entries} */
  const entries = {};
  flatten(job, "", entries);
  delete entries["format"];
  return entries;
}

/** @param {unknown} value @param {string} path @param {Entries} entries */
function flatten(value, path, entries) {
  if (value === null || value === undefined) return;
  if (Array.isArray(value)) value.forEach((item, index) => flatten(item, join(path, index), entries));
  else if (typeof value === "object") {
    for (const [name, item] of Object.entries(value)) flatten(item, join(path, name), entries);
  } else entries[path] = String(value);
}

/**
 * A file's text as data whose numbers are the text they were written with.
 *
 * @param {string} text
 * @param {(key: string, digits: string) => string} [write]
 * @returns {unknown}
 */
export function readFile(text, write = (_key, digits) => digits) {
  /** @type {(this: any, key: string, value: unknown, context?: {source?: string}) => unknown} */
  const keepDigits = (key, value, context) =>
    typeof value === "number" ? write(key, context?.source ?? String(value)) : value;
  return JSON.parse(text, keepDigits);
}

/**
 * A job file's text as a document. A JSON number needs no plus sign, a typed power does: it is written out.
 *
 * @param {string} text
 * @returns {unknown}
 */
export function readJobFile(text) {
  return readFile(text, (key, digits) => (SIGNED.has(key) && !digits.startsWith("-") ? `+${digits}` : digits));
}

/** @param {Entries} entries whether there is an order or a reading to answer */
export function hasOrder(entries) {
  return Object.entries(entries).some(
    ([path, text]) => text.trim() && /^(right|left|readings)\./.test(path) && !isLoneBase(entries, path),
  );
}

/**
 * What the next job begins with: this bench and its rules. A job from elsewhere (a file, the demonstration) brings its
 * own bench; the one it pushed aside stands under `page-bench` and comes back with the next job.
 *
 * @param {Entries} entries
 * @returns {Entries}
 */
export function nextJob(entries) {
  const aside = Object.entries(entries).filter(([path]) => path.startsWith(ASIDE));
  if (entries[GUEST]) return Object.fromEntries(aside.map(([path, text]) => [path.slice(ASIDE.length), text]));
  return Object.fromEntries(Object.entries(entries).filter(([path]) => BENCH.test(path)));
}

/**
 * A job from elsewhere on this bench.
 *
 * @param {Entries} entries what is there now
 * @param {Entries} job
 * @returns {Entries}
 */
export function guestJob(entries, job) {
  const own = Object.entries(nextJob(entries)).map(([path, text]) => [ASIDE + path, text]);
  return { ...job, ...Object.fromEntries(own), [GUEST]: "true" };
}

/**
 * Puts what a check of the lens meter settled into the bench, in place: of this job, and of the bench that a job from
 * elsewhere pushed aside.
 *
 * @param {Entries} draft
 * @param {Entries} fields
 */
export function settleBench(draft, fields) {
  for (const prefix of draft[GUEST] ? ["", ASIDE] : [""]) {
    for (const [path, text] of Object.entries(fields)) draft[prefix + path] = text;
  }
}

/** @param {Entries} entries @param {string} prefix removes a branch, in place */
export function removeBranch(entries, prefix) {
  for (const path of Object.keys(entries)) {
    if (path === prefix || path.startsWith(`${prefix}.`) || path.startsWith(`${prefix}[`)) {
      delete entries[path];
    }
  }
}
