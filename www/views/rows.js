/** Rows of numbers: name, value with unit, a line on its meaning. */

import { NO_BREAK, typeset } from "../text/figures.js";
import { make } from "./element.js";

/** Longer values take the place of their meaning, which then stands below. */
const ONE_LINE = 26;

/** @param {SheetRow} row */
function rowElement(row) {
  const element = make("tr", "", { "data-code": row.code });
  const long = row.value.length > ONE_LINE;
  const value = make("td", typeset(row.value), long ? { class: "long", colspan: "2" } : { class: "value" });
  if (row.unit !== "") value.append(make("span", `${NO_BREAK}${row.unit}`, { class: "unit-of" }));
  if (long) value.append(make("div", typeset(row.meaning), { class: "small" }));
  element.append(make("th", typeset(row.label), { scope: "row" }), value);
  if (!long) element.append(make("td", typeset(row.meaning), { class: "meaning small" }));
  return element;
}

/**
 * Writes the rows anew, around a row of the page's own that stays in its place under the hands of whoever types in it.
 * @param {HTMLTableSectionElement} body
 * @param {SheetRow[]} rows
 * @param {{ after: string, element: HTMLElement }} [own]
 */
export function writeRows(body, rows, own) {
  const elements = rows.map(rowElement);
  const at = own === undefined ? -1 : rows.findIndex((row) => row.code === own.after);
  if (own === undefined || at < 0) return body.replaceChildren(...elements);
  if (own.element.parentElement !== body) body.replaceChildren(own.element);
  for (const row of [...body.children]) if (row !== own.element) row.remove();
  own.element.before(...elements.slice(0, at + 1));
  own.element.after(...elements.slice(at + 1));
}
