/** What was typed, with undo. Every change makes a new snapshot; nothing else holds the job. */

/** @typedef {import("./types.js").Entries} Entries */

const STEPS = 200;

/** @typedef {ReturnType<typeof createState>} State */

/** @param {Entries} [initial] */
export function createState(initial = {}) {
  /** @type {Entries} */
  let entries = { ...initial };
  let version = 0;
  /** @type {Entries[]} */
  let past = [];
  /** @type {Entries[]} */
  let future = [];
  let open = "";
  /** @type {((entries: Entries) => void)[]} */
  const listeners = [];

  /** @param {Entries} next */
  function show(next) {
    entries = next;
    version += 1;
    for (const listener of listeners) listener(entries);
  }

  /** @param {Entries} next @param {string} group consecutive changes of one group are one step */
  function step(next, group) {
    if (same(entries, next)) return;
    if (!group || group !== open) past = [...past, entries].slice(-STEPS);
    open = group;
    future = [];
    show(next);
  }

  return {
    get entries() {
      return entries;
    },
    get version() {
      return version;
    },
    get canUndo() {
      return past.length > 0;
    },
    get canRedo() {
      return future.length > 0;
    },
    /** @param {string} path @param {string} text one keystroke; those in one field are one step */
    set(path, text) {
      const next = unsigned(entries);
      if (text) next[path] = text;
      else delete next[path];
      step(next, path);
    },
    /** Ends the step that keystrokes were gathered in. */
    seal() {
      open = "";
    },
    /** @param {(draft: Entries) => void} change one step of several fields @param {string} [group] as with `set` */
    change(change, group = "") {
      const next = unsigned(entries);
      change(next);
      step(next, group);
    },
    /** @param {string} initials @param {string} at signing is the one change that keeps a signature */
    sign(initials, at) {
      step({ ...entries, "signed.initials": initials, "signed.at": at }, "");
    },
    /** @param {Entries} next a whole job, as one step that can be undone */
    replace(next) {
      step({ ...next }, "");
    },
    /** @param {Entries} earlier what was saved before the page was opened again */
    recover(earlier) {
      if (version === 0) show({ ...earlier });
      else past = [{ ...earlier }, ...past];
    },
    undo() {
      const before = past.pop();
      if (!before) return;
      future.push(entries);
      open = "";
      show(before);
    },
    redo() {
      const after = future.pop();
      if (!after) return;
      past.push(entries);
      open = "";
      show(after);
    },
    /** @param {(entries: Entries) => void} listener */
    subscribe(listener) {
      listeners.push(listener);
    },
  };
}

/** @param {Entries} entries a copy without the signature: who changes a job takes the sign-off away */
function unsigned(entries) {
  const copy = { ...entries };
  delete copy["signed.initials"];
  delete copy["signed.at"];
  return copy;
}

/** @param {Entries} one @param {Entries} other */
function same(one, other) {
  const names = Object.keys(one);
  return names.length === Object.keys(other).length && names.every((name) => one[name] === other[name]);
}
