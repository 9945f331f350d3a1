/** What the page carries packed: gzip, then base64. */

/** @param {string} text @returns {Uint8Array<ArrayBuffer>} */
function bytesOfBase64(text) {
  const direct = /** @type {any} */ (Uint8Array).fromBase64;
  if (typeof direct === "function") return direct.call(Uint8Array, text);
  return Uint8Array.from(atob(text), (letter) => letter.charCodeAt(0));
}

/** @param {string} text @returns {Response} what was packed */
export function unpacked(text) {
  const packed = new Blob([bytesOfBase64(text)]);
  return new Response(packed.stream().pipeThrough(new DecompressionStream("gzip")));
}
