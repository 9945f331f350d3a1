/** Starts the engine of the page from what the file carries: compiles once, hands the module to workers. */

import { unpacked } from "../../text/packed.js";
import { compileWasm } from "../wasm.js";
import { lacksMemory } from "../fault.js";
import { makePool } from "./pool.js";

/** @param {string} id */
function carriedText(id) {
  return document.getElementById(id)?.textContent ?? "";
}

/** @param {string} code @param {unknown} cause */
function unavailable(code, cause) {
  return Object.assign(new Error(""), { code, details: String(cause) });
}

/** The only policy of the page for script addresses: workers from blobs it has made itself. */
function workerAddresses() {
  const types = /** @type {any} */ (globalThis).trustedTypes;
  const rules = {
    /** @param {string} address */
    createScriptURL(address) {
      if (!address.startsWith("blob:")) throw new TypeError("workers come from blobs only");
      return address;
    },
  };
  return types === undefined ? rules : types.createPolicy("pool", rules);
}

export async function startPool() {
  if (typeof WebAssembly === "undefined") throw unavailable("wasm-unavailable", "WebAssembly is not defined");
  /** @type {WebAssembly.Module} */
  let module;
  try {
    module = await compileWasm(carriedText("wasm"));
  } catch (error) {
    const code = error instanceof Error && lacksMemory(error) ? "memory-lacking" : "wasm-unavailable";
    throw unavailable(code, error);
  }
  try {
    const script = new Blob([await unpacked(carriedText("worker")).text()], { type: "text/javascript" });
    const address = workerAddresses().createScriptURL(URL.createObjectURL(script));
    return makePool(module, () => new Worker(address));
  } catch (error) {
    throw unavailable("worker-unavailable", error);
  }
}
