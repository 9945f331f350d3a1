/** Elements of the template, by id and kind. */

/**
 * @template {HTMLElement} T
 * @param {string} id
 * @param {new () => T} kind
 * @returns {T}
 */
export function need(id, kind) {
  const element = document.getElementById(id);
  if (!(element instanceof kind)) throw new TypeError(`the template has no ${id}`);
  return element;
}

/**
 * @param {string} tag
 * @param {string} text
 * @param {Record<string, string>} [attributes]
 */
export function make(tag, text, attributes = {}) {
  const element = document.createElement(tag);
  element.textContent = text;
  for (const [name, value] of Object.entries(attributes)) element.setAttribute(name, value);
  return element;
}
