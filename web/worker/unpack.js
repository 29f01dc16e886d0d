/**
 * From the text of a payload to its bytes. Made by build/payload.mjs: whether the last byte is only there to make a pair, the
 * mark of the program that it was built with, then gzip, two bytes to a character.
 */

const MARK_BEGIN = 1;
const MARK_END = 9;

/** Before a character that stands for one that cannot be in a text. */
export const ESCAPE = 0xe000;
/** What makes the one of the other. */
export const MASK = 0x4a00;

/** The mark of a payload: those with the same belong together. @param {string} text */
export function markOf(text) {
  return text.slice(MARK_BEGIN, MARK_END);
}

/**
 * @param {string} text
 * @returns {Uint8Array<ArrayBuffer>}
 */
export function bytesOf(text) {
  const units = new Uint16Array(text.length);
  let length = 0;
  for (let index = MARK_END; index < text.length; index += 1) {
    let unit = text.charCodeAt(index);
    if (unit === ESCAPE) {
      index += 1;
      unit = text.charCodeAt(index) ^ MASK;
    }
    units[length] = unit;
    length += 1;
  }
  return new Uint8Array(units.buffer, 0, 2 * length - (text[0] === "1" ? 1 : 0));
}

/**
 * @param {Uint8Array<ArrayBuffer>} bytes gzip
 * @returns {ReadableStream<Uint8Array<ArrayBuffer>>}
 */
export function inflated(bytes) {
  const gunzip = new DecompressionStream("gzip");
  // Written by hand: WebKit does not read a Blob's stream here.
  const writer = gunzip.writable.getWriter();
  const written = [writer.write(bytes), writer.close()];
  written.forEach((step) => step.catch(() => {})); // an error shows where the stream is read
  return gunzip.readable;
}

/**
 * @param {ReadableStream<Uint8Array<ArrayBuffer>>} stream
 * @returns {Promise<Uint8Array<ArrayBuffer>>}
 */
export async function readAll(stream) {
  return new Uint8Array(await new Response(stream).arrayBuffer());
}

/** Some milliseconds of work. */
const PIECE = 60_000;

/** Lets everything else that waits for this thread go first. */
function others() {
  return new Promise((resolve) => {
    const { port1, port2 } = new MessageChannel();
    port1.onmessage = () => {
      port1.close();
      resolve(undefined);
    };
    port2.postMessage(null);
  });
}

/**
 * The same as reading all that is inflated, in pieces, for the thread on which somebody may be typing.
 *
 * @param {Uint8Array<ArrayBuffer>} bytes gzip
 * @returns {Promise<Uint8Array<ArrayBuffer>>}
 */
export async function inflatedInPieces(bytes) {
  const length = new DataView(bytes.buffer, bytes.byteOffset, bytes.length).getUint32(bytes.length - 4, true); // by RFC 1952
  const gunzip = new DecompressionStream("gzip");
  const write = async () => {
    const writer = gunzip.writable.getWriter();
    for (let at = 0; at < bytes.length; at += PIECE) {
      await others();
      await writer.write(bytes.subarray(at, at + PIECE));
    }
    await writer.close();
  };
  const read = async () => {
    const whole = new Uint8Array(length);
    const reader = gunzip.readable.getReader();
    let at = 0;
    for (let next = await reader.read(); !next.done; next = await reader.read()) {
      whole.set(next.value, at);
      at += next.value.length;
    }
    return whole;
  };
  const [whole] = await Promise.all([read(), write()]);
  return whole;
}
