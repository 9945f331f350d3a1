/** The numbers, each with its unit and a line on its meaning; a copy of the table and the whole report. */

import { copyText, saveBlob } from "../export/out.js";
import { tableText } from "../export/table.js";
import { typeset } from "../text/figures.js";
import { word } from "../text/words.js";
import { confirmOn } from "./confirm.js";
import { make, need } from "./element.js";

/** @import { Session } from "../session/session.js" */

const REPORT_NAME = "inward-report.json";
/** Longer values take the place of their meaning, which then stands below. */
const ONE_LINE = 26;

/** @param {SheetRow} row */
function rowElement(row) {
  const element = make("tr", "");
  element.append(make("th", row.label, { scope: "row" }));
  if (row.value.length > ONE_LINE) {
    const both = make("td", "", { class: "long", colspan: "2" });
    both.append(
      ...row.value.split("; ").map((part) => make("div", typeset(part))),
      make("div", row.meaning, { class: "small" }),
    );
    element.append(both);
  } else {
    const value = make("td", typeset(row.value), { class: "value" });
    if (row.unit !== "") value.append(make("span", `\u00a0${row.unit}`, { class: "unit-of" }));
    element.append(value, make("td", typeset(row.meaning), { class: "meaning small" }));
  }
  return element;
}

/** @param {Session} session */
export function showNumbers(session) {
  const body = need("numbers", HTMLTableElement).tBodies[0];
  const copy = need("copy-table", HTMLButtonElement);
  const download = need("download-json", HTMLButtonElement);
  let saving = false;

  copy.addEventListener("click", async () => {
    const rows = session.read().answer?.sheet?.rows;
    if (rows === undefined) return;
    const heading = [word("numbers.quantity"), word("numbers.value"), word("numbers.unit")];
    confirmOn(copy, await copyText(tableText(rows, heading)));
  });
  download.addEventListener("click", async () => {
    if (saving) return;
    saving = true;
    const report = await session.report();
    saving = false;
    if (report !== null) saveBlob(report, REPORT_NAME);
  });

  session.watch(
    (state) => state.answer?.sheet,
    (sheet) => body.replaceChildren(...(sheet?.rows ?? []).map(rowElement)),
  );
}
