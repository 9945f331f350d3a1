/** The invented maps that the page carries. */

/** @returns {Example[]} */
export function carriedExamples() {
  return JSON.parse(document.getElementById("examples")?.textContent ?? "[]");
}
