/** From the text of a payload to its bytes: each character is two bytes of gzip. Made by build/payload.mjs. */

/** Before a character that stands for one that cannot be in a text. */
export const ESCAPE = 0xe000;
/** What makes the one of the other. */
export const MASK = 0x4a00;

/**
 * @param {string} text
 * @returns {Uint8Array<ArrayBuffer>}
 */
export function bytesOf(text) {
  const units = new Uint16Array(text.length);
  let length = 0;
  for (let index = 1; index < text.length; index += 1) {
    let unit = text.charCodeAt(index);
    if (unit === ESCAPE) {
      index += 1;
      unit = text.charCodeAt(index) ^ MASK;
    }
    units[length] = unit;
    length += 1;
  }
  return new Uint8Array(units.buffer, 0, 2 * length - Number(text[0]));
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
