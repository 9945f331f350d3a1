/** The page of one map: verdict, figures, numbers, region, limits; and its technical note. */

import { verdictMark } from "../draw/region.js";
import { beginning, verdictParts } from "../text/trust.js";
import { mapText, word } from "../text/words.js";
import { ALTERNATIVE_COLUMNS, alternativeRows } from "../views/alternatives.js";
import { headFigure, mapsFigure } from "../views/plates.js";
import { figureOf, bulletsOf, numbersOf, paragraph, put, tableOf } from "./pieces.js";

/** @import { ReportedMap, ReportedTable } from "../session/paper.js" */

/** @param {Trust["verdict"]} verdict */
function verdictLine(verdict) {
  if (verdict === null) return paragraph(word("report.no-verdict"), "verdict");
  const [title, rest] = verdictParts(verdict);
  return put("p", { class: "verdict", "data-verdict": verdict.word }, verdictMark(verdict.word), " ", put("strong", {}, title), rest);
}

/** @param {Alternatives | null} alternatives */
function othersOf(alternatives) {
  if (alternatives === null) return [paragraph(word("report.others-none"), "small")];
  const heads = ALTERNATIVE_COLUMNS.map((code) => word(`alternatives.${code}`));
  const lines = [...alternatives.kinds.slice(1).map(({ label, sentence }) => `${beginning(label)}: ${sentence}`), ...alternatives.notes];
  return [
    put("h3", {}, word("alternatives")),
    paragraph(alternatives.sentence),
    tableOf(word("alternatives"), heads, alternativeRows(alternatives), "scant"),
    bulletsOf("", lines, "small"),
  ];
}

/** @param {Trust} trust @param {Trust["verdict"]} verdict */
function trustOf({ region, cautions }, verdict) {
  const causes = region.causes.map(({ label, size, sd }) => [label, size, sd]);
  return [
    put(
      "div",
      { class: "beside" },
      put(
        "div",
        {},
        bulletsOf(word("verdict.reasons"), (verdict?.reasons ?? []).map(({ text }) => text), "small"),
        bulletsOf(word("verdict.hints"), (verdict?.hints ?? []).map(({ text }) => text), "small"),
      ),
      put("div", {}, bulletsOf(word("report.cautions"), cautions, "small")),
    ),
    put("h3", {}, word("region")),
    paragraph(region.sentence),
    put(
      "div",
      { class: "beside" },
      numbersOf(word("region.numbers"), [...region.rows, ...(region.repeats?.rows ?? [])]),
      put("div", {}, tableOf(word("region.causes"), ["region.cause", "region.size", "region.sd"].map(word), causes, "scant"), paragraph(region.structure, "small")),
    ),
    bulletsOf("", region.notes, "small"),
  ];
}

/**
 * @param {ReportedMap} one
 * @param {ReportedTable} table
 * @returns {(Node | null)[]}
 */
export function mapPage({ index, sheet, trust, alternatives }, { answer, preamble }) {
  const map = answer.maps[index];
  const warnings = preamble.notes.filter(({ severity }) => severity === "warning").map(({ message }) => `${word("note.warning")}: ${message}`);
  const title = put("h2", {}, mapText(answer, index));
  if (sheet === null || trust === null) {
    const text = "error" in map ? [`${map.name}: ${map.error.message}`, map.error.hint] : [word("report.not-fitted")];
    return [title, ...text.map((line) => paragraph(line)), bulletsOf("", warnings, "warned")];
  }
  const verdict = alternatives?.verdict ?? trust.verdict;
  const prefix = `map-${index + 1}-`;
  const turned = word(sheet.figure.axis ? "where.axis" : "where.arrow");
  return [
    title,
    verdictLine(verdict),
    paragraph(sheet.sentence, "sentence"),
    bulletsOf("", warnings, "warned"),
    figureOf(mapsFigure(sheet), prefix, ""),
    figureOf(headFigure(sheet, { region: trust.region, alternatives }), `${prefix}head-`, `${turned} ${word("where.lines")}`),
    put("div", { class: "columns" }, numbersOf(word("report.numbers"), sheet.rows)),
    ...trustOf(trust, verdict),
    ...othersOf(alternatives),
  ];
}

/** @param {TechnicalRecord} note */
export function notePage({ title, parts }) {
  return [
    put("h2", {}, title),
    put("div", { class: "columns" }, ...parts.flatMap(({ heading, lines }) => [put("h3", {}, heading), ...lines.map((line) => paragraph(line))])),
  ];
}
