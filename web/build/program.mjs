/**
 * Takes out of Pyodide's program the exports that nothing here uses. It has ten thousand of them, for packages that are
 * compiled apart and loaded later; there are none here, and each costs time at every start.
 */

import { EXPORT_LIST } from "./scripts.mjs";

const IMPORTS = 2;
const EXPORTS = 7;
/** Called by names that are put together from parts. */
const PUT_TOGETHER = /^dynCall_/;
/** Reads a WebAssembly module's numbers and names, from the front to the back. */
class Reader {
  /** @param {Uint8Array} bytes @param {number} [at] */
  constructor(bytes, at = 0) {
    this.bytes = bytes;
    this.at = at;
  }

  /** An unsigned number in LEB128. */
  number() {
    let value = 0;
    for (let shift = 0; ; shift += 7) {
      const byte = this.byte();
      value += (byte & 0x7f) * 2 ** shift;
      if (byte < 0x80) {
        return value;
      }
    }
  }

  byte() {
    const byte = this.bytes[this.at];
    if (byte === undefined) {
      throw new Error("The program ends too early.");
    }
    this.at += 1;
    return byte;
  }

  name() {
    const length = this.number();
    this.at += length;
    return Buffer.from(this.bytes.subarray(this.at - length, this.at)).toString("utf8");
  }
}

/** @param {number} value */
function leb(value) {
  const bytes = [];
  for (let rest = value; ; ) {
    const low = rest & 0x7f;
    rest >>>= 7;
    bytes.push(rest ? low | 0x80 : low);
    if (!rest) {
      return bytes;
    }
  }
}

/** @param {Uint8Array} bytes */
function sections(bytes) {
  const reader = new Reader(bytes, 8); // after the magic word and the version
  const found = [];
  while (reader.at < bytes.length) {
    const begin = reader.at;
    const id = reader.byte();
    const length = reader.number();
    found.push({ id, begin, contents: bytes.subarray(reader.at, reader.at + length) });
    reader.at += length;
  }
  return found;
}

/** The names in an import section (of the tables of addresses by name, they are exports as well). @param {Uint8Array} contents */
function wordsOf(contents) {
  return Buffer.from(contents).toString("latin1");
}

/**
 * @param {Uint8Array} program
 * @param {string} scripts what runs it
 * @returns {Uint8Array<ArrayBuffer>}
 */
export function withUsedExports(program, scripts) {
  const parts = sections(program);
  const imports = parts.find(({ id }) => id === IMPORTS);
  const exports = parts.find(({ id }) => id === EXPORTS);
  if (!imports || !exports) {
    throw new Error("Not the program that is expected.");
  }
  const words = new Set(`${scripts.replace(EXPORT_LIST, "")} ${wordsOf(imports.contents)}`.match(/[\w$]+/g));
  const reader = new Reader(exports.contents);
  const kept = [];
  for (let left = reader.number(); left > 0; left -= 1) {
    const begin = reader.at;
    const name = reader.name();
    reader.byte(); // its kind
    reader.number(); // its index
    if (words.has(name) || words.has(`_${name}`) || PUT_TOGETHER.test(name)) {
      kept.push(exports.contents.subarray(begin, reader.at));
    }
  }
  const contents = Buffer.concat([Buffer.from(leb(kept.length)), ...kept]);
  const after = exports.contents.byteOffset + exports.contents.length - program.byteOffset;
  return Buffer.concat([
    program.subarray(0, exports.begin),
    Buffer.from([EXPORTS, ...leb(contents.length)]),
    contents,
    program.subarray(after),
  ]);
}

/**
 * The names that a program takes and gives.
 *
 * @param {Uint8Array<ArrayBuffer>} program
 */
export function namesOf(program) {
  const module = new WebAssembly.Module(program);
  const names = (/** @type {{name: string}[]} */ list) => new Set(list.map(({ name }) => name));
  return { imports: names(WebAssembly.Module.imports(module)), exports: names(WebAssembly.Module.exports(module)) };
}
