/** The numbers as tab-separated text, for a spreadsheet or a manuscript's table. */

/** @param {SheetRow[]} rows @param {string[]} heading */
export function tableText(rows, heading) {
  return [heading, ...rows.map((row) => [row.label, row.value, row.unit])].map((cells) => cells.join("\t")).join("\n");
}
