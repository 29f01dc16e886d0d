/** From bytes to the text that a payload is in the page: gzip, two bytes to each character. Undone by worker/unpack.js. */
import { execFileSync } from "node:child_process";
import { createHash } from "node:crypto";
import { ESCAPE, MASK } from "../worker/unpack.js";

const LARGEST = 64_000_000;

/** The same bytes in gzip, as small as it goes; `build.py` says which Python has the library for it. @param {Uint8Array} bytes */
function gzip(bytes) {
  const python = process.env["WEDGEWRIGHT_PYTHON"];
  if (!python) {
    throw new Error("Called by build.py, which names the Python that packs.");
  }
  const program = "import sys, deflate; sys.stdout.buffer.write(deflate.gzip_compress(sys.stdin.buffer.read(), 12))";
  return execFileSync(python, ["-S", "-c", program], { input: bytes, maxBuffer: LARGEST });
}

/**
 * What may not stand for itself in a script's string or in a page: the end of a line or of the string, the begin of a tag,
 * halves of a pair, and the marks of the byte order.
 *
 * @param {number} unit
 */
const isForbidden = (unit) =>
  (unit >= 0xd800 && unit <= 0xdfff) ||
  [0, 0x0a, 0x0d, 0x22, 0x3c, 0x5c, 0x2028, 0x2029, 0xfeff, 0xfffe, 0xffff, ESCAPE].includes(unit);

/** What tells a program from every other, in eight characters. @param {Uint8Array} program */
export function markFor(program) {
  return createHash("sha256").update(program).digest("hex").slice(0, 8);
}

/**
 * The text of a payload: whether the last byte is only there to make a pair, the mark, then the pairs.
 *
 * @param {Uint8Array} bytes
 * @param {string} mark
 */
export function textOf(bytes, mark) {
  const odd = bytes.length % 2;
  const even = Buffer.alloc(bytes.length + odd);
  even.set(bytes);
  const characters = [String(odd), mark];
  for (let index = 0; index < even.length; index += 2) {
    const unit = even.readUInt16LE(index);
    characters.push(isForbidden(unit) ? String.fromCharCode(ESCAPE, unit ^ MASK) : String.fromCharCode(unit));
  }
  return characters.join("");
}

/** @param {Uint8Array} bytes @param {string} mark */
export function packed(bytes, mark) {
  return textOf(gzip(bytes), mark);
}

/** A file's bytes: two to a character, with the mark that every browser heeds before whatever a server says. @param {string} text */
export function wide(text) {
  return Buffer.from(`\ufeff${text}`, "utf16le");
}
