/** The invented maps that the page carries. */

/** @returns {Example[]} */
export function carriedExamples() {
  /** @param {string} name */
  const file = (name) => ({ name, content: EXAMPLES.files[name] });
  return EXAMPLES.list.map((example) => ({
    ...example,
    maps: file(example.maps),
    beside: example.beside.map(file),
    electrodes: example.electrodes === null ? null : file(example.electrodes),
  }));
}
