/**
 * The kept memory holds only what differs from the memory of the program before it has run, whose tables (a seventh of it,
 * and the part that packs worst) are in the program already.
 *
 * Its head is Pyodide's own: the second word says where the memory begins; the fourth, which Pyodide leaves free, says how
 * many words were taken away.
 */

const BEGIN = 1;
const COUNT = 3;

/**
 * @param {Uint8Array<ArrayBuffer>} kept changed in place
 * @param {Uint32Array} fresh
 * @param {number} count words
 */
function exclusiveOr(kept, fresh, count) {
  const words = new Uint32Array(kept.buffer, new Uint32Array(kept.buffer)[BEGIN], count);
  for (let index = 0; index < count; index += 1) {
    words[index] = /** @type {number} */ (words[index]) ^ /** @type {number} */ (fresh[index]);
  }
}

/**
 * Makes a kept memory whole.
 *
 * @param {Uint8Array<ArrayBuffer>} kept changed in place
 * @param {WebAssembly.Memory} memory of the program before it has run
 */
export function addFresh(kept, memory) {
  const head = new Uint32Array(kept.buffer);
  exclusiveOr(kept, new Uint32Array(memory.buffer), head[COUNT] ?? 0);
}

/**
 * Takes away from a memory what the program has before it has run. Done once, by the build.
 *
 * @param {Uint8Array<ArrayBuffer>} kept changed in place
 * @param {Uint32Array} fresh
 */
export function takeFresh(kept, fresh) {
  const count = fresh.findLastIndex((word) => word !== 0) + 1;
  exclusiveOr(kept, fresh, count);
  new Uint32Array(kept.buffer)[COUNT] = count;
}
