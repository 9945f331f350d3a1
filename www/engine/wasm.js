/** Compiles the engine from the text it is carried in. */

import { unpacked } from "../text/packed.js";
import { putTogether } from "./streams.js";

/** @param {string} text @returns {Promise<WebAssembly.Module>} */
export async function compileWasm(text) {
  return WebAssembly.compile(putTogether(unpacked(text)));
}
