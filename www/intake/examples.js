/** The invented maps that the page carries. */

/** @returns {Example[]} */
export function carriedExamples() {
  const carried = JSON.parse(document.getElementById("examples")?.textContent ?? "{}");
  /** @param {string | null} name */
  const file = (name) => (name === null ? null : { name, content: carried.files[name] });
  return (carried.list ?? []).map((/** @type {any} */ example) => ({
    ...example,
    maps: file(example.maps),
    electrodes: file(example.electrodes),
  }));
}
