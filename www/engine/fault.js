/**
 * Anything thrown, in the plain form that crosses to the page. Code `given-up` means that nobody waits for the
 * answer any more; it is never shown.
 */

/** Browsers have no code for it, only words. @param {{ name: string, message: string }} thrown */
export function lacksMemory({ name, message }) {
  return (
    ["RangeError", "InternalError", "DataCloneError", "QuotaExceededError"].includes(name) &&
    /memory|allocat/i.test(message)
  );
}

/** @param {unknown} error @returns {Fault} */
export function faultOf(error) {
  const thrown = /** @type {any} */ (
    error instanceof Error || error instanceof DOMException ? error : new Error(String(error))
  );
  if (typeof thrown.code === "string") {
    return {
      code: thrown.code,
      message: thrown.message,
      where: thrown.where ?? null,
      hint: thrown.hint ?? "",
      details: thrown.details,
    };
  }
  const details = `${thrown.name}: ${thrown.message}\n${thrown.stack ?? ""}`;
  return {
    code: thrown.name === "AbortError" ? "given-up" : lacksMemory(thrown) ? "memory-lacking" : "page-error",
    message: "",
    where: null,
    hint: "",
    details,
  };
}
