/** Elements of the template, by id and kind. */

import { NO_BREAK } from "../text/figures.js";

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

/** Puts elements of a template into their place. @param {HTMLElement} place @param {Markup[]} parts */
export function furnish(place, parts) {
  for (const part of parts) {
    if (typeof part === "string") {
      place.append(part);
      continue;
    }
    const [tag, attributes, ...content] = part;
    const element = make(tag, "", attributes);
    furnish(element, content);
    place.append(element);
  }
}

/** Tells a screen reader; the same words twice running would not be heard. @param {string} text */
export function speak(text) {
  const spoken = need("spoken", HTMLElement);
  spoken.textContent = spoken.textContent === text ? `${text}${NO_BREAK}` : text;
}

/** Another text of an element; one that has it already is left alone, or it would be laid out again. @param {Element} element @param {string} text */
export function rewrite(element, text) {
  if (element.textContent !== text) element.textContent = text;
}
