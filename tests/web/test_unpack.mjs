// The text code of the payloads, there and back; the gzip is Node's own (zlib, RFC 1952).
import assert from "node:assert/strict";
import { randomBytes } from "node:crypto";
import { test } from "node:test";
import { gzipSync } from "node:zlib";
import { textOf, wide } from "../../web/build/payload.mjs";
import { bytesOf, inflated, inflatedInPieces, markOf, readAll } from "../../web/worker/unpack.js";

const MARK = "0123cdef";
const EVERY_PAIR = new Uint8Array(new Uint16Array(65536).map((_, index) => index).buffer);

test("every pair of bytes survives, an odd one at the end too", () => {
  assert.deepEqual(bytesOf(textOf(EVERY_PAIR, MARK)), EVERY_PAIR);
  assert.equal(markOf(textOf(EVERY_PAIR, MARK)), MARK);
  assert.deepEqual(bytesOf(textOf(EVERY_PAIR.subarray(1), MARK)), EVERY_PAIR.slice(1));
  assert.deepEqual(bytesOf(textOf(new Uint8Array(), MARK)), new Uint8Array());
});

test("the text survives being a file, a script's string and a page's", () => {
  const text = textOf(EVERY_PAIR, MARK);
  assert.equal(text.isWellFormed(), true, "no half of a pair, which a decoder would replace");
  assert.equal(new TextDecoder("utf-16le", { fatal: true }).decode(wide(text)), text);
  assert.doesNotMatch(text, /[\0\n\r"<\\\u2028\u2029]/);
});

test("what is inflated at once or in pieces is what was deflated", async () => {
  for (const length of [0, 1, 1_500_001]) {
    const bytes = new Uint8Array(randomBytes(length));
    const packed = new Uint8Array(gzipSync(bytes));
    assert.deepEqual(await readAll(inflated(packed)), bytes);
    assert.deepEqual(await inflatedInPieces(packed), bytes);
  }
});

test("what is cut short is refused", async () => {
  const packed = new Uint8Array(gzipSync(randomBytes(1_500_001))).subarray(0, 900_000);
  await assert.rejects(readAll(inflated(packed)));
  await assert.rejects(inflatedInPieces(packed));
});
