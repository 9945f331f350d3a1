/** The numbers as tab-separated text, for a spreadsheet or a manuscript's table. */

import { guarded } from "./rows.js";

/** @param {SheetRow[]} rows @param {string[]} heading */
export function tableText(rows, heading) {
  return [heading, ...rows.map((row) => [row.label, row.value, row.unit])].map((cells) => cells.join("\t")).join("\n");
}

/** A table as tab-separated text, safe for a spreadsheet. @param {string[][]} rows */
export function cellsText(rows) {
  return rows.map((cells) => cells.map(guarded).join("\t")).join("\n");
}
