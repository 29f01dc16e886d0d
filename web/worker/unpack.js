/** From the text of a payload to its bytes. */

/**
 * @param {string} text
 * @returns {Uint8Array<ArrayBuffer>}
 */
export function bytesOf(text) {
  if ("fromBase64" in Uint8Array) {
    return /** @type {any} */ (Uint8Array).fromBase64(text);
  }
  const characters = atob(text); // older browsers: some 10 ms slower
  const bytes = new Uint8Array(characters.length);
  for (let index = 0; index < characters.length; index += 1) {
    bytes[index] = characters.charCodeAt(index);
  }
  return bytes;
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
