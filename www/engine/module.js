/** The engine for scripts and other pages: `const engine = await openEngine()`. */

import { makeEngine } from "./engine.js";
import { compileWasm } from "./wasm.js";

/** Everything after this one wait is synchronous. @returns {Promise<Engine>} */
export async function openEngine() {
  const module = await compileWasm(WASM_PACKED);
  return makeEngine(() => module);
}
