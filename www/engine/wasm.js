/** Compiles the engine from the text it is carried in: gzip, then base64. */

/** @param {string} text @returns {Uint8Array<ArrayBuffer>} */
function bytesOfBase64(text) {
  const direct = /** @type {any} */ (Uint8Array).fromBase64;
  if (typeof direct === "function") return direct.call(Uint8Array, text);
  return Uint8Array.from(atob(text), (letter) => letter.charCodeAt(0));
}

/** @param {string} text @returns {Promise<WebAssembly.Module>} */
export async function compileWasm(text) {
  const packed = new Blob([bytesOfBase64(text)]);
  const unpacked = packed.stream().pipeThrough(new DecompressionStream("gzip"));
  return WebAssembly.compile(await new Response(unpacked).arrayBuffer());
}
