/** What would move the fit of the map in view: other heads, other electrodes; bars and numbers in one table. */

import { copyText } from "../export/out.js";
import { cellsText } from "../export/table.js";
import { explainedOf } from "../session/explanations.js";
import { typeset } from "../text/figures.js";
import { word } from "../text/words.js";
import { confirmOn } from "./confirm.js";
import { make, need } from "./element.js";
import { askWhenOpen, toldIn } from "./influence.js";
import { writeLines } from "./trust.js";

/** @import { Session } from "../session/session.js" */

const WHAT_IF_COLUMNS = ["change", "shift", "depth", "rv"];

/** A number with its bar, from and to in parts of the longest; one with a sign goes to either side. @param {string} text @param {number[]} ends @param {boolean} signed */
function barCell(text, ends, signed) {
  const cell = make("td", "");
  const bar = make("span", "", { class: signed ? "cause-bar signed-bar" : "cause-bar", "aria-hidden": "true" });
  const from = Math.min(...ends);
  bar.style.setProperty("--share", String(Math.max(...ends) - from));
  bar.style.setProperty("--from", String(from));
  cell.append(make("span", typeset(text), { class: "bar-value" }), bar);
  return cell;
}

/** @param {WhatIf["rows"]} rows */
function rowElements(rows) {
  const most = Math.max(1e-9, ...rows.map(({ shift_mm }) => shift_mm));
  return rows.map(({ change, label, shift, depth, rv, shift_mm, depth_mm, none }) => {
    const row = make("tr", "", { "data-change": change });
    row.append(make("th", typeset(label), { scope: "row" }));
    if (none !== null) row.append(make("td", typeset(none), { colspan: "3", class: "small long" }));
    else row.append(barCell(shift, [0, shift_mm / most], false), barCell(depth, depth_mm.map((mm) => mm / most), true), make("td", typeset(rv)));
    return row;
  });
}

/** @param {Session} session */
export function showWhatIf(session) {
  askWhenOpen(session, "what-if");
  const copy = need("copy-what-if", HTMLButtonElement);
  const heads = WHAT_IF_COLUMNS.map((code) => word(`what-if.${code}`));
  copy.addEventListener("click", async () => {
    const { whatIf } = explainedOf(session.read());
    const rows = whatIf?.rows.map(({ label, shift, depth, rv, none }) => (none === null ? [label, shift, depth, rv] : [label, none])) ?? [];
    confirmOn(copy, await copyText(cellsText([heads, ...rows])));
  });
  session.watch(
    (state) => explainedOf(state).whatIf,
    (whatIf) => {
      if (!toldIn("what-if", whatIf)) return;
      const table = need("what-if-table", HTMLTableElement);
      table.tHead?.rows[0].replaceChildren(...heads.map((text) => make("th", text, { scope: "col" })));
      table.tBodies[0].replaceChildren(...rowElements(whatIf.rows));
      writeLines("what-if-notes", whatIf.notes.map((text) => ({ text })));
    },
  );
}
