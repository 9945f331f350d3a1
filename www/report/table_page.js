/** The page of a decomposition: its files and what was made of them, its head, its shares, dipoles and maps. */

import { verdictMark } from "../draw/region.js";
import { freshMaps } from "../session/decompositions.js";
import { shortName, typeset } from "../text/figures.js";
import { factsOfTable, notListedText } from "../text/report.js";
import { cellText, columnHead, columnText, factsText, labelLines, mapText, roleText, symbolOf, word } from "../text/words.js";
import { dipolesFigure, sharesFigure } from "./figures.js";
import { figureOf, bulletsOf, paragraph, put, tableOf } from "./pieces.js";

/** @import { ShareLine } from "../draw/curves.js" */
/** @import { ReportedTable } from "../session/paper.js" */

/** Maps of a table that are listed at most. */
const MOST_TABLE_LINES = 200;
const LISTED_COLUMNS = ["rv", "site", "side", "depth"];

/** @param {InwardReport} preamble */
export function filesTable({ inputs, understood }) {
  const rows = inputs.map(({ name, sha256 }) => {
    const parts = understood.files.filter((file) => file.name === name);
    const roles = [...new Set(parts.map(({ role }) => roleText(role)))];
    return [shortName(name), roles.join(", "), put("code", {}, sha256)];
  });
  return tableOf(word("report.files"), ["report.file", "report.role", "report.digest"].map(word), rows, "files");
}

/** @param {InwardReport} preamble */
export function outText({ electrodes }) {
  const out = electrodes.filter(({ used }) => !used).map(({ label }) => shortName(label));
  return `${word("report.out")}: ${out.length === 0 ? word("report.out-none") : out.join(", ")}.`;
}

/** @param {ReportedTable} table @param {TableColumn[]} columns */
function mapsTable({ answer }, columns) {
  const fitted = freshMaps(answer).flatMap((map, index) => ("rv" in map ? [{ map, index }] : [])).sort((a, b) => a.map.rv - b.map.rv);
  const unfitted = freshMaps(answer).flatMap((map, index) => ("error" in map ? [{ map, index }] : []));
  const shown = columns.filter(({ code }) => LISTED_COLUMNS.includes(code));
  /** @param {number} index */
  const name = (index) => `${index + 1} · ${mapText(answer, index)}`;
  const rows = fitted.slice(0, MOST_TABLE_LINES).map(({ map, index }) => {
    const verdict = answer.verdicts?.[index];
    const said = verdict ? put("span", { class: "said" }, verdictMark(verdict), " ", word(`verdict.${verdict}`)) : word("verdict.none");
    return [name(index), ...(answer.verdicts === null ? [] : [said]), ...shown.map(({ code, unit }) => typeset(cellText(map, columns, code).replace(` ${symbolOf(unit)}`, "")))];
  });
  const none = unfitted.slice(0, MOST_TABLE_LINES - rows.length).map(({ index }) => [`${name(index)}, ${word("report.not-fitted")}`, ...(answer.verdicts === null ? [] : [""]), ...shown.map(() => "")]);
  const all = fitted.length + unfitted.length;
  const more = all - rows.length - none.length;
  return [
    tableOf(word("report.maps"), [word("ledger.number"), ...(answer.verdicts === null ? [] : [word("verdict")]), ...shown.map(columnHead)], [...rows, ...none], "columns"),
    more > 0 ? paragraph(notListedText(more, all), "small") : null,
  ];
}

/** What was understood, each with how it came about. @param {InwardReport} preamble */
function understoodLines({ understood }) {
  const files = understood.files.filter(({ role }) => role !== "unused");
  return [
    ...files.map((file) => `${[file.name, file.part].map((one) => shortName(one ?? "")).filter((one) => one !== "").join(", ")}: ${factsText(file)} ${columnText(file)}`.trim()),
    ...understood.choices.map(({ sentence, from }) => `${sentence} (${word(`from.${from}`)})`),
    ...labelLines(understood.labels),
  ];
}

/**
 * @param {ReportedTable} table
 * @param {{ line: ShareLine | undefined, threshold: number, columns: TableColumn[], prefix: string }} shown
 * @returns {(Node | null)[]}
 */
export function tablePage(table, { line, threshold, columns, prefix }) {
  const { answer, preamble, head, name, subject } = table;
  const fitted = freshMaps(answer).filter((map) => "rv" in map).length;
  const used = preamble.electrodes.filter((electrode) => electrode.used).length;
  const components = preamble.understood.columns_are === "components";
  const several = fitted > 1;
  const dipoles = dipolesFigure(answer, threshold);
  return [
    put("h2", {}, [word("report.summary"), name, subject].filter((part) => part !== "").map(shortName).join(" · ")),
    paragraph(`${factsOfTable(answer.count, fitted, used)} ${outText(preamble)} ${word("report.unit")}: ${word(`unit.${answer.settings.mapUnit}`)}.`),
    filesTable(preamble),
    several && line !== undefined ? figureOf(sharesFigure([line], threshold, components), `${prefix}shares-`, "", 620) : null,
    several ? figureOf(dipoles, `${prefix}dipoles-`, dipoles.description) : null,
    ...(several ? mapsTable(table, columns) : []),
    head === null ? null : put("h3", {}, `${word("head")} ${head.title}`),
    head === null ? null : paragraph(`${head.source === "" ? "" : `${head.source}. `}${head.rows.map(({ label, value, unit }) => `${label}: ${value} ${unit}`.trim()).join("; ")}.`, "small"),
    bulletsOf(word("report.understood"), understoodLines(preamble), "small"),
    bulletsOf(word("report.noticed"), preamble.notes.map(({ severity, message }) => (severity === "warning" ? `${word("note.warning")}: ${message}` : message)), "small"),
  ];
}
