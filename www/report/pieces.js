/** What a report is built of: paragraphs, lists, tables with captions, figures with words. Text is set for the eye. */

import { typeset } from "../text/figures.js";
import { word } from "../text/words.js";
import { drawFigure } from "../views/figure.js";

/** @import { FigureParts } from "../views/figure.js" */

/** CSS pixels across paper between its margins; on a page figures shrink with it. */
export const ACROSS = 700;

/** @param {string} tag @param {Record<string, string>} attributes @param {(Node | string | null)[]} content nothing is left out */
export function put(tag, attributes, ...content) {
  const element = document.createElement(tag);
  for (const [name, value] of Object.entries(attributes)) element.setAttribute(name, value);
  element.append(...content.flatMap((part) => (part === null || part === "" ? [] : [typeof part === "string" ? typeset(part) : part])));
  return element;
}

/** @param {string} text @param {string} [kind] */
export function paragraph(text, kind = "") {
  return text === "" ? null : put("p", kind === "" ? {} : { class: kind }, text);
}

/** A list under a heading; nothing where it is empty. @param {string} heading @param {(Node | string)[]} lines @param {string} [kind] */
export function bulletsOf(heading, lines, kind = "") {
  if (lines.length === 0) return null;
  const list = put("ul", {}, ...lines.map((line) => put("li", {}, line)));
  return put("div", kind === "" ? {} : { class: kind }, heading === "" ? null : put("h3", {}, heading), list);
}

/**
 * A table that is as wide as it must be, its first column naming the rows; nothing where it has none.
 * @param {string} caption
 * @param {string[]} heads
 * @param {(Node | string)[][]} rows
 * @param {string} [kind]
 */
export function tableOf(caption, heads, rows, kind = "") {
  if (rows.length === 0) return null;
  const head = put("tr", {}, ...heads.map((text) => put("th", { scope: "col" }, text)));
  const body = rows.map(([first, ...cells]) => put("tr", {}, put("th", { scope: "row" }, first), ...cells.map((cell) => put("td", {}, cell))));
  const table = put("table", {}, put("caption", {}, caption), put("thead", {}, head), put("tbody", {}, ...body));
  return put("div", { class: `table ${kind}`.trim(), role: "group", tabindex: "0", "aria-label": caption }, table);
}

/** Numbers with their units. @param {string} caption @param {SheetRow[]} rows */
export function numbersOf(caption, rows) {
  const heads = ["numbers.quantity", "numbers.value"].map(word);
  return tableOf(caption, heads, rows.map(({ label, value, unit }) => [label, `${value} ${unit}`.trim()]), "amounts");
}

/** @param {FigureParts} parts @param {string} prefix of names within it, its own in the report @param {string} words below it @param {number} [width] */
export function figureOf(parts, prefix, words, width = ACROSS) {
  const svg = drawFigure(parts, width, { prefix });
  const frame = put("div", { class: "drawn", role: "group", tabindex: "0", "aria-label": parts.title }, svg);
  return put("figure", {}, frame, words === "" ? null : put("figcaption", {}, words));
}
