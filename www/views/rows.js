/** Rows of numbers: name, value with unit, a line on its meaning. */

import { typeset } from "../text/figures.js";
import { make } from "./element.js";

/** Longer values take the place of their meaning, which then stands below. */
const ONE_LINE = 26;

/** @param {SheetRow} row */
function rowElement(row) {
  const element = make("tr", "", { "data-code": row.code });
  element.append(make("th", row.label, { scope: "row" }));
  if (row.value.length > ONE_LINE) {
    const both = make("td", "", { class: "long", colspan: "2" });
    both.append(
      ...row.value.split("; ").map((part) => make("div", typeset(part))),
      make("div", typeset(row.meaning), { class: "small" }),
    );
    element.append(both);
  } else {
    const value = make("td", typeset(row.value), { class: "value" });
    if (row.unit !== "") value.append(make("span", `\u00a0${row.unit}`, { class: "unit-of" }));
    element.append(value, make("td", typeset(row.meaning), { class: "meaning small" }));
  }
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
