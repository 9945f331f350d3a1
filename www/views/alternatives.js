/** What else reproduces the map in view: looked for when asked, told in a table and sentences, drawn into the views of the head. */

import { copyText } from "../export/out.js";
import { cellsText } from "../export/table.js";
import { explainedOf } from "../session/explanations.js";
import { typeset } from "../text/figures.js";
import { beginning } from "../text/trust.js";
import { word } from "../text/words.js";
import { confirmOn } from "./confirm.js";
import { make, need } from "./element.js";
import { withTerms } from "./terms.js";
import { writeLines } from "./trust.js";

/** @import { Session } from "../session/session.js" */

export const ALTERNATIVE_COLUMNS = ["kind", "rv", "adjusted", "parameters", "distance", "f", "bic", "share", "decision"];

/** @param {Alternatives} alternatives */
export const alternativeRows = ({ kinds }) => kinds.map(({ label, cells, decision }) => [label, ...cells, word(`alternatives.${cells[0] === "" ? "none" : decision}`)]);

/** @param {HTMLTableElement} table @param {string[][]} rows the first has their heads */
export function writeTable(table, [heads, ...rows]) {
  table.tHead?.rows[0].replaceChildren(...heads.map((text) => make("th", text, { scope: "col" })));
  table.tBodies[0].replaceChildren(...rows.map(([first, ...cells]) => {
    const row = make("tr", "");
    row.append(make("th", typeset(first), { scope: "row" }), ...cells.map((cell) => make("td", typeset(cell))));
    return row;
  }));
}

/** @param {Session} session */
export function showAlternatives(session) {
  const [go, stop, copy] = ["explain", "explain-stop", "copy-alternatives"].map((id) => need(id, HTMLButtonElement));
  const heads = ALTERNATIVE_COLUMNS.map((code) => word(`alternatives.${code}`));

  go.addEventListener("click", () => {
    session.explain();
    stop.focus();
  });
  stop.addEventListener("click", () => {
    session.stopExplaining();
    go.focus();
  });
  copy.addEventListener("click", async () => {
    const { alternatives } = explainedOf(session.read());
    if (alternatives !== null) confirmOn(copy, await copyText(cellsText([heads, ...alternativeRows(alternatives)])));
  });

  session.watch(
    (state) => explainedOf(state).searching,
    (searching) => {
      const focused = document.activeElement === stop;
      need("explaining", HTMLElement).hidden = !searching;
      go.hidden = searching || explainedOf(session.read()).alternatives !== null;
      // What came in takes over from the button that waited for it.
      if (focused && !searching) (go.hidden ? need("alternatives-sentence", HTMLElement) : go).focus();
    },
  );
  session.watch(
    (state) => explainedOf(state).alternatives,
    (alternatives) => {
      need("alternatives-found", HTMLElement).hidden = alternatives === null;
      go.hidden = alternatives !== null || explainedOf(session.read()).searching;
      need("alternatives-sentence", HTMLElement).replaceChildren(...withTerms(typeset(alternatives?.sentence ?? word("alternatives.hint"))));
      if (alternatives === null) return;
      const table = need("alternatives-table", HTMLTableElement);
      writeTable(table, [heads, ...alternativeRows(alternatives)]);
      alternatives.kinds.forEach(({ kind, decision }, at) => Object.assign(table.tBodies[0].rows[at].dataset, { kind, decision }));
      writeLines("alternatives-lines", [...alternatives.kinds.slice(1).map(({ label, sentence }) => `${beginning(label)}: ${sentence}`), ...alternatives.notes].map((text) => ({ text })));
    },
  );
}
