/** Cells of a table that are selected and copied go as plain numbers, one row a line; everything else is copied as it is. */

import { cellsText, plainNumber, plainText } from "../export/table.js";
import { guarded } from "../export/rows.js";

/** Beside a value: its unit, what it means, what went wrong with an entry; marks. */
const ASIDE = ".unit-of, .small, .entry-fault, svg, [aria-hidden]";

/** @param {Node} node @returns {string} */
function textOf(node) {
  if (node instanceof HTMLInputElement) return node.type === "text" ? node.value : "";
  if (node instanceof Element && node.matches(ASIDE)) return "";
  return node.nodeType === Node.TEXT_NODE ? (node.textContent ?? "") : [...node.childNodes].map(textOf).join("");
}

/** @param {HTMLTableCellElement} cell */
function valueOf(cell) {
  const text = [...cell.childNodes].map(textOf).join("");
  return cell.tagName === "TD" ? plainNumber(text) : plainText(text);
}

/** A cell as fields: a unit that stands beside the value has a field of its own, and what it means one. @param {HTMLTableCellElement} cell @param {boolean} units */
function fieldsOf(cell, units) {
  if (!units || !cell.matches(".value, .long")) return [valueOf(cell)];
  return [valueOf(cell), ...[".unit-of", ".small"].flatMap((part, at) => {
    const told = cell.querySelector(part)?.textContent;
    return at === 0 ? [told ?? ""] : (told ?? []);
  })];
}

/** What of a cell is selected, null where it is only touched. @param {Range} range @param {Node} cell */
function within(range, cell) {
  const part = document.createRange();
  part.selectNodeContents(cell);
  const [late, early] = [range.compareBoundaryPoints(Range.START_TO_START, part) > 0, range.compareBoundaryPoints(Range.END_TO_END, part) < 0];
  if (late) part.setStart(range.startContainer, range.startOffset);
  if (early) part.setEnd(range.endContainer, range.endOffset);
  const text = part.toString();
  return (late || early) && text.trim() === "" ? null : text;
}

/** Whether anything beside the table is selected. @param {Range} range @param {HTMLTableElement} table */
function reachesOut(range, table) {
  const [before, after] = [range.cloneRange(), range.cloneRange()];
  if (!table.contains(range.startContainer)) before.setEndBefore(table);
  else before.collapse(true);
  if (!table.contains(range.endContainer)) after.setStartAfter(table);
  else after.collapse(true);
  return `${before}${after}`.trim() !== "";
}

/** The text of selected cells, null where something else is selected. @param {Selection} selection */
function selectedCells(selection) {
  // Firefox selects cells one by one.
  const ranges = Array.from({ length: selection.rangeCount }, (_, at) => selection.getRangeAt(at));
  const tables = [...document.querySelectorAll("table")].filter((table) => ranges.some((range) => !range.collapsed && range.intersectsNode(table)));
  if (tables.length !== 1 || ranges.some((range) => reachesOut(range, tables[0]))) return null;
  /** @type {{ cells: HTMLTableCellElement[], parts: (string | null)[] }[]} */
  const rows = [];
  for (const row of tables[0].rows) {
    // Pictures that unfold in a table are none of its cells.
    const cells = [...row.cells].filter((cell) => cell.getClientRects().length > 0 && cell.querySelector("figure") === null);
    const parts = cells.map((cell) => ranges.reduce((part, range) => (range.intersectsNode(cell) ? within(range, cell) : null) ?? part, /** @type {string | null} */ (null)));
    const chosen = parts.flatMap((part, at) => (part === null ? [] : [at]));
    if (chosen.length > 0) {
      const [first, last] = [chosen[0], chosen[chosen.length - 1] + 1];
      rows.push({ cells: cells.slice(first, last), parts: parts.slice(first, last) });
    }
  }
  if (rows.length === 0) return null;
  const [{ cells, parts }] = rows;
  if (rows.length === 1 && cells.length === 1) {
    const part = parts[0] ?? "";
    const whole = part.trim() === (cells[0].textContent ?? "").trim();
    return whole ? guarded(valueOf(cells[0])) : plainText(part);
  }
  const units = tables[0].querySelector(".unit-of") !== null;
  return cellsText(rows.map((row) => row.cells.flatMap((cell) => fieldsOf(cell, units))));
}

export function copyCellsPlainly() {
  document.addEventListener("copy", (event) => {
    const selection = getSelection();
    if (event.target instanceof HTMLInputElement || event.target instanceof HTMLTextAreaElement || selection === null) return;
    const text = selectedCells(selection);
    if (text === null) return;
    event.clipboardData?.setData("text/plain", text);
    event.preventDefault();
  });
}
