/** Starts the engine of the page from what the file carries: one worker compiles, all are handed the module. */

import { unpackedText } from "../../text/packed.js";
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

/** @param {Worker} worker a fresh one @returns {Promise<WebAssembly.Module>} */
function compiledBy(worker) {
  return new Promise((resolve, reject) => {
    worker.onmessage = ({ data: { module, fault } }) => {
      if (module !== undefined) return resolve(module);
      worker.terminate();
      reject(unavailable(fault.code, fault.details));
    };
    worker.onerror = (event) => {
      event.preventDefault();
      reject(unavailable("worker-unavailable", event.message ?? ""));
    };
    worker.onmessageerror = () => reject(unavailable("wasm-unavailable", "the module could not be handed over"));
    worker.postMessage({ carried: carriedText("wasm") });
  });
}

export async function startPool() {
  if (typeof WebAssembly === "undefined") throw unavailable("wasm-unavailable", "WebAssembly is not defined");
  // What there is to see so far is shown first.
  await new Promise((resolve) => setTimeout(resolve));
  /** @type {() => Worker} */
  let start;
  /** @type {Worker | null} */
  let compiling;
  try {
    const script = new Blob([unpackedText(carriedText("worker"))], { type: "text/javascript" });
    const address = workerAddresses().createScriptURL(URL.createObjectURL(script));
    start = () => new Worker(address);
    compiling = start();
  } catch (error) {
    throw unavailable("worker-unavailable", error);
  }
  const module = await compiledBy(compiling);
  compiling.onmessage = compiling.onerror = compiling.onmessageerror = null;
  // The worker that has compiled is the first of the pool.
  return makePool(module, () => {
    const worker = compiling ?? start();
    compiling = null;
    return worker;
  });
}
