/**
 * What this tablet keeps: the draft in two slots by turns, the signed jobs, the shop's own editions, and what the
 * check of its lens meter found. Strict durability; a promise is kept only
 * when the write is complete. Storage is shared by all pages opened from disk, hence the name.
 */

const NAME = "wedgewright";
const STORES = ["drafts", "jobs", "editions", "bench"];

/** @typedef {Awaited<ReturnType<typeof openStore>>} Store */

/**
 * Of the way in which all this is laid down: one more with each change that an older program would not understand.
 * 1 had no place for the bench.
 */
const DATA_VERSION = 2;

/** @param {number} [version] without it, whatever is there @returns {Promise<IDBDatabase>} */
function open(version) {
  return new Promise((resolve, reject) => {
    const request = indexedDB.open(NAME, version);
    request.onupgradeneeded = () => {
      const { objectStoreNames: there } = request.result;
      for (const name of STORES) if (!there.contains(name)) request.result.createObjectStore(name);
    };
    request.onsuccess = () => resolve(request.result);
    request.onerror = () => reject(request.error);
    request.onblocked = () => reject(new Error("blocked"));
  });
}

/** What a newer program has laid down is opened all the same, to be shown. @returns {Promise<IDBDatabase>} */
async function openAny() {
  try {
    return await open(DATA_VERSION);
  } catch (error) {
    if (error instanceof DOMException && error.name === "VersionError") return open();
    throw error;
  }
}

export async function openStore() {
  const database = await openAny();
  const newer = database.version > DATA_VERSION;
  // Another window may erase the data; holding on would block it.
  database.onversionchange = () => database.close();

  /**
   * @template T
   * @param {string} store
   * @param {IDBTransactionMode} mode
   * @param {(place: IDBObjectStore) => IDBRequest<T>} act
   * @returns {Promise<T>}
   */
  function transact(store, mode, act) {
    return new Promise((resolve, reject) => {
      if (newer && mode === "readwrite") throw new DOMException("What is kept is newer than this program.", "ReadOnlyError");
      const transaction = database.transaction(store, mode, { durability: "strict" });
      const request = act(transaction.objectStore(store));
      transaction.oncomplete = () => resolve(request.result);
      transaction.onabort = () => reject(transaction.error);
      transaction.onerror = () => reject(transaction.error);
    });
  }

  return {
    /** Whether what is kept was laid down by a newer program: then it is shown and nothing is written, erasing apart. */
    newer,
    /** @param {string} store @param {IDBValidKey} key @param {unknown} value */
    put: (store, key, value) => transact(store, "readwrite", (place) => place.put(value, key)),
    /** @param {string} store @returns {Promise<any[]>} */
    all: (store) => transact(store, "readonly", (place) => place.getAll()),
    /** @param {string} store @param {IDBValidKey} key */
    remove: (store, key) => transact(store, "readwrite", (place) => place.delete(key)),
    /** Removes everything that was ever kept here. */
    erase() {
      database.close();
      return new Promise((resolve, reject) => {
        const request = indexedDB.deleteDatabase(NAME);
        request.onsuccess = () => resolve(undefined);
        request.onerror = () => reject(request.error);
        request.onblocked = () => reject(new Error("blocked"));
      });
    },
  };
}
