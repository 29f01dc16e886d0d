/** The shop's own editions: checked by the core, kept on this device, sent along with every request that judges. */

/**
 * @typedef {{id: string, name?: string}} ShopEdition as it was written, whatever else is in it
 */

/**
 * @param {object} tools
 * @param {import("./types.js").Engine} tools.engine
 * @param {(list: any[]) => void} tools.listed every edition that can be chosen
 */
export function shopEditions({ engine, listed }) {
  /** @type {ShopEdition[]} */
  let editions = [];
  /** @type {import("./store.js").Store|null} */
  let store = null;
  let known = false;

  /** @param {{idle?: boolean}} [how] `idle` at the start, when the first answer goes before */
  async function list({ idle = false } = {}) {
    const given = await engine.ask({ do: "list-editions", editions }, { lane: "editions", idle });
    if (!given?.["editions"]) return;
    known = true;
    listed(given["editions"]);
  }

  return {
    get all() {
      return editions;
    },
    list,
    /** Asks for the list unless it is there: the first answer is drawn, and the next thing may be to choose. */
    listOnce() {
      if (!known) list();
    },
    /** @param {import("./store.js").Store} opened */
    async open(opened) {
      store = opened;
      editions = await opened.all("editions");
      list({ idle: true });
    },
    /** @param {unknown} edition @returns {Promise<import("./types.js").Fault[]>} what is wrong with it; nothing where it was taken */
    async add(edition) {
      const given = await engine.ask({ do: "check-edition", edition }, { lane: "check-edition" });
      if (!given) return [];
      if (given["errors"]) return given["errors"];
      const taken = /** @type {ShopEdition} */ (edition);
      editions = [...editions.filter(({ id }) => id !== taken.id), taken];
      await store?.put("editions", taken.id, taken).catch(() => {}); // not kept, as the page says: it holds until it is closed
      await list();
      return [];
    },
    /** @param {string} id */
    async remove(id) {
      editions = editions.filter((edition) => edition.id !== id);
      await store?.remove("editions", id).catch(() => {});
      await list();
    },
  };
}
