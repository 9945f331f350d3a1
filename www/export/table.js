/** Numbers as tab-separated text, for a spreadsheet or a manuscript's table: with the signs of a keyboard, and names that are no formulas. */

import { guarded } from "./rows.js";

/** What is set for the eye, as it is typed: minus signs, and blanks that keep a line together. @param {string} text */
export function plainText(text) {
  return text.replace(/\u2212/g, "-").replace(/[\u2009\u202f]/g, "").replace(/\s+/g, " ").trim();
}

/** A number of a table, without what parts its thousands. @param {string} text */
export function plainNumber(text) {
  const plain = plainText(text);
  return /^[+-]?\d{1,3}(,\d{3})+(\.\d+)?$/.test(plain) ? plain.replaceAll(",", "") : plain;
}

/** @param {SheetRow[]} rows @param {string[]} heading */
export function tableText(rows, heading) {
  return cellsText([heading, ...rows.map((row) => [row.label, row.value, row.unit])]);
}

/** A table as tab-separated text, safe for a spreadsheet. @param {string[][]} rows */
export function cellsText(rows) {
  return rows.map((cells) => cells.map((cell) => guarded(plainText(cell))).join("\t")).join("\n");
}
