/** A report: its parts, each on paper of its own, as elements that are printed or saved as they are. */

import { programText } from "../text/faults.js";
import { shortName, typeset } from "../text/figures.js";
import { dayText, reportedText } from "../text/report.js";
import { mapText, word } from "../text/words.js";
import { shareLines, shareTables } from "../views/share_tables.js";
import { sharesFigure } from "./figures.js";
import { mapPage, notePage } from "./map_page.js";
import { bulletsOf, paragraph, put, figureOf, tableOf } from "./pieces.js";
import { filesTable, outText, tablePage } from "./table_page.js";

/** @import { ReportedTable, ReportedWork } from "../session/paper.js" */

/** What a person adds by hand. @typedef {{ person: string, remarks: string }} Added */

/** Room for a name and remarks. @param {Added} added */
function room({ person, remarks }) {
  /** @param {string} code @param {string} text */
  const field = (code, text) => [put("dt", {}, word(code)), put("dd", { class: text === "" ? "blank" : "" }, text)];
  return put("dl", { class: "room" }, ...field("report.name", person), ...field("report.remarks", remarks));
}

/** @param {ReportedTable} table */
const tableName = ({ name, subject }) => [name, subject].filter((part) => part !== "").map(shortName).join(", ");

/** @param {ReportedWork} work @param {SessionState} state */
function comparisonPage({ summary, threshold, tables }, state) {
  if (summary === null) return [];
  const labels = new Map(tables.map((table) => [table.id, table]));
  const codes = /** @type {Record<string, string>} */ ({ "group-table": "shares.groups", "share-table": "shares.table", "difference-table": "shares.differences" });
  const components = tables.every(({ preamble }) => preamble.understood.columns_are === "components");
  return [
    put("h2", {}, word("report.comparison")),
    figureOf(sharesFigure(shareLines(summary, state, labels), threshold, components), "compared-", ""),
    ...shareTables(summary, state, labels).map(({ id, heading, rows }) => tableOf(word(codes[id]), heading, rows)),
    bulletsOf("", summary.notes.map(({ message }) => message), "small"),
  ];
}

/**
 * @param {ReportedWork} work
 * @param {SessionState} state
 * @param {Added} added
 * @returns {{ title: string, sections: HTMLElement[] }}
 */
export function writtenReport(work, state, added) {
  const { program, date, tables, own, maps, summary, methods, parts, alone, threshold, columns } = work;
  const made = program === null ? "" : programText(program);
  /** @type {HTMLElement[]} */
  const sections = [];
  /** @param {string} kind @param {string} what it is of @param {(Node | null)[]} content */
  const section = (kind, what, content) => {
    const running = put("p", { class: "running" }, put("span", {}, what), " ", put("span", {}, [made, dayText(date), word("report.research")].join(" · ")));
    const page = put("section", { class: `leaf ${kind}` }, running, put("div", { class: "body" }, ...content));
    sections.push(page);
  };
  if (parts.includes("summary")) {
    for (const [at, table] of tables.entries()) {
      const name = alone ? "" : tableName(table);
      const single = summary === null ? null : { ...summary, groups: [] };
      const line = single === null ? undefined : shareLines(single, state, new Map([[table.id, table]])).find(({ id }) => id === table.id);
      section("summary", [word("report.summary"), name].filter((part) => part !== "").join(" · "), [
        ...tablePage(table, { line, threshold, columns, prefix: `table-${at + 1}-` }),
        room(added),
      ]);
    }
    if (!alone) section("comparison", word("report.comparison"), [...comparisonPage(work, state), room(added)]);
  }
  for (const one of maps) {
    const what = reportedText(one.index, mapText(own.answer, one.index), alone ? "" : tableName(own));
    if (parts.includes("maps")) {
      section("map", what, [
        ...mapPage(one, own),
        filesTable(own.preamble),
        paragraph(`${own.head === null ? "" : `${word("head")} ${own.head.title}. `}${outText(own.preamble)}`, "small"),
        room(added),
      ]);
    }
    if (one.note !== null) section("note", what, [...notePage(one.note), room(added)]);
  }
  if (methods !== null) {
    section("methods", word("report.methods"), [
      put("h2", {}, word("report.methods")),
      paragraph(methods.paragraph),
      put("h3", {}, word("report.references")),
      put("ol", {}, ...methods.references.map((reference) => put("li", {}, reference))),
    ]);
  }
  const title = typeset(word("report.title"));
  sections[0]?.querySelector(".body")?.prepend(put("h1", {}, title));
  return { title, sections };
}
