/** The draft that outlives a kill, and the signed jobs. */

/**
 * @typedef {import("./types.js").Entries} Entries
 * @typedef {import("./store.js").Store} Store
 * @typedef {{version: number, entries: Entries, hash: string}} Draft
 * @typedef {{key: string, id: string, at: string, initials: string, outcome: string, sentence: string, edition: string, entries: Entries}} KeptJob
 * @typedef {"saving"|"saved"|"recovered"|"elsewhere"|"newer"|"off"} SaveStatus
 */

const PAUSE_MS = 150;

/** @param {string} text @returns {Promise<string>} sha-256 in hexadecimal */
export async function hashOf(text) {
  const digest = await crypto.subtle.digest("SHA-256", new TextEncoder().encode(text));
  return [...new Uint8Array(digest)].map((byte) => byte.toString(16).padStart(2, "0")).join("");
}

/** @param {Entries} entries */
function sealOf(entries) {
  return hashOf(JSON.stringify(Object.entries(entries).sort(([a], [b]) => (a < b ? -1 : 1))));
}

/**
 * The newest draft that is whole: of the two slots a kill can spoil only the one being written.
 *
 * @param {Draft[]} drafts
 * @returns {Promise<Draft|null>}
 */
export async function newestWhole(drafts) {
  for (const draft of [...drafts].sort((a, b) => b.version - a.version)) {
    if (draft.entries && (await sealOf(draft.entries)) === draft.hash) return draft;
  }
  return null;
}

/** Resolves to true when this window is the one that saves. The lock is held as long as the window lives. */
function onlyWindow() {
  if (!navigator.locks) return Promise.resolve(true);
  return new Promise((resolve) => {
    navigator.locks.request("wedgewright-draft", { ifAvailable: true }, (lock) => {
      resolve(lock !== null);
      return lock ? new Promise(() => {}) : undefined;
    });
  });
}

/**
 * @param {import("./state.js").State} state
 * @param {Store} store
 * @param {(status: SaveStatus) => void} tell
 */
export async function keepDraft(state, store, tell) {
  const draft = await newestWhole(await store.all("drafts"));
  let version = draft?.version ?? 0;
  let saved = -1;
  let busy = false;

  if (draft && Object.keys(draft.entries).length) {
    const untouched = state.version === 0;
    state.recover(draft.entries);
    if (untouched) saved = state.version;
    tell("recovered");
  }
  if (store.newer) {
    tell("newer");
    return;
  }
  if (!(await onlyWindow())) {
    tell("elsewhere");
    return;
  }

  async function save() {
    if (busy || saved === state.version) return;
    busy = true;
    const wanted = state.version;
    const { entries } = state;
    try {
      version += 1;
      await store.put("drafts", version % 2, { version, entries, hash: await sealOf(entries) });
      saved = wanted;
      if (state.version === wanted) tell("saved");
    } catch {
      tell("off");
    }
    busy = false;
    if (saved !== state.version) later();
  }

  let timer = 0;
  function later() {
    clearTimeout(timer);
    timer = window.setTimeout(save, PAUSE_MS);
  }

  let waiting = 0;
  state.subscribe(() => {
    tell("saving");
    // The pause is counted from the first change, so that steady typing is saved as well.
    if (waiting) return;
    waiting = window.setTimeout(() => {
      waiting = 0;
      save();
    }, PAUSE_MS);
  });
  save();
}

/** @param {Date} now local date and time, largest unit first */
export function stamp(now) {
  const two = (/** @type {number} */ value) => String(value).padStart(2, "0");
  return `${now.getFullYear()}-${two(now.getMonth() + 1)}-${two(now.getDate())} ${two(now.getHours())}:${two(now.getMinutes())}`;
}
