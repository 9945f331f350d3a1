/** The words of what leaves: the panel where it is asked for, and a report on paper or as a page. */

import { harmless, NO_BREAK, shortName } from "./figures.js";

/** @type {Record<string, string>} */
export const REPORT_WORDS = {
  leaving: "Take it with you",
  "leaving.way": "Take it with you: print, save, methods",
  "leaving.hint": "A report of the maps that you choose, on paper or as one file that any browser shows, without a script. It goes where you take it, and nowhere else.",
  "leaving.which": "Maps",
  "leaving.which.view": "the one in view",
  "leaving.which.dipolar": "with the verdict dipolar",
  "leaving.which.near": "up to the threshold",
  "leaving.which.listed": "all listed",
  "leaving.which.own": "by number",
  "leaving.numbers": "Numbers",
  "leaving.numbers-hint": "As in 1, 4-6: those of the list, in the order of the table.",
  "leaving.size": "Paper",
  "leaving.parts": "Parts",
  "leaving.part.summary": "summary",
  "leaving.part.maps": "maps",
  "leaving.part.methods": "methods",
  "leaving.part.notes": "technical notes",
  "leaving.explained": "with other explanations of each map, which takes longer",
  "leaving.hidden": "Names of files and subjects, which may be those of people, are left out of everything here: of report, title and the names of saved files. Names that you typed and names of maps stay.",
  "leaving.shown": "Names of files and subjects are in the report, in its title and in the names of saved files.",
  "leaving.person": "Name, to be printed",
  "leaving.remarks": "Remarks, to be printed",
  "leaving.kept": "Kept in this tab alone. Left empty, there is room to write by hand.",
  "leaving.print": "Print",
  "leaving.save": "Save as page",
  "leaving.methods": "Copy methods",
  "leaving.note": "Copy technical note",
  "leaving.busy": "Making the report",
  "leaving.given-up": "The report was given up.",
  "leaving.changed": "The answer has changed meanwhile. Ask for the report again.",
  "leaving.ready": "The report is ready.",
  "leaving.no-parts": "Tick at least one of the parts.",
  "leaving.none": "No map is chosen: write their numbers, as in 1, 4-6.",

  "report.title": "Report on equivalent dipoles",
  "report.research": "research use, not a medical device",
  "report.made": "Made",
  "report.program": "Program",
  "report.name": "Name",
  "report.remarks": "Remarks",
  "report.contents": "Contents",
  "report.summary": "Summary",
  "report.comparison": "Decompositions compared",
  "report.methods": "Methods",
  "report.references": "References",
  "report.unit": "Unit of the maps",
  "report.files": "Files",
  "report.file": "File",
  "report.role": "Read as",
  "report.digest": "SHA-256",
  "report.head": "Head",
  "report.out": "Electrodes left out",
  "report.out-none": "none",
  "report.understood": "What was understood and assumed",
  "report.noticed": "Notes and warnings",
  "report.maps": "Maps by residual variance",
  "report.not-fitted": "not fitted",
  "report.no-verdict": "Without a verdict: the reference maps were not drawn.",
  "report.cautions": "Limits and cautions",
  "report.numbers": "Numbers of the fit",
  "report.others-none": "Other explanations of this map were not looked for.",
  "report.share": "Share of the maps with RV at most x",
};

/** @param {number} chosen @param {number} most */
export function tooManyText(chosen, most) {
  return `${chosen.toLocaleString("en-GB")} maps are chosen; a report has at most ${most}.`;
}

/** @param {number} count */
export function chosenText(count) {
  return `${count.toLocaleString("en-GB")}${NO_BREAK}map${count === 1 ? "" : "s"}`;
}

/** An entry that is no number or range of numbers. @param {string} entry */
export function noNumberText(entry) {
  return `“${shortName(entry)}” is no number of a map: write numbers and ranges, as in 1, 4-6.`;
}

/** @param {string} entry @param {number} count of maps */
export function beyondText(entry, count) {
  return `“${shortName(entry)}” is beyond the maps of this table, which are 1 to ${count.toLocaleString("en-GB")}.`;
}

/** @param {string} entry */
export function backwardsText(entry) {
  return `“${shortName(entry)}” runs backwards: write the smaller number first.`;
}

/** @param {FitProgress} step */
export function reportingText({ done, total }) {
  return `${REPORT_WORDS["leaving.busy"]}: ${done} of ${chosenText(total)}`;
}

/** @param {number} index @param {string} name @param {string} table or empty */
export function reportedText(index, name, table) {
  return [`map ${index + 1}`, shortName(name), shortName(table)].filter((part) => part !== "").join(" · ");
}

/** A day and its time as everybody reads it. @param {Date} date */
export function dayText(date) {
  return `${date.toLocaleDateString("en-GB", { day: "numeric", month: "long", year: "numeric" })}, ${date.toLocaleTimeString("en-GB", { hour: "2-digit", minute: "2-digit" })}`;
}

/** How many maps of a table there are and are used. @param {number} all @param {number} fitted @param {number} electrodes */
export function factsOfTable(all, fitted, electrodes) {
  const missing = all === fitted ? "" : `, ${(all - fitted).toLocaleString("en-GB")} not fitted`;
  return `${chosenText(all)}${missing}; ${electrodes} electrodes used.`;
}

/** @param {number} more @param {number} all */
export function notListedText(more, all) {
  return `${more.toLocaleString("en-GB")} more of ${all.toLocaleString("en-GB")} maps, of higher residual variance or not fitted, are not listed here.`;
}

/** A name for a file, of letters that every system takes. @param {string} name @param {Date} date */
export function fileText(name, date) {
  const day = date.toISOString().slice(0, 10);
  const own = harmless(name).replace(/[^\p{L}\p{N}._-]+/gu, "-").replace(/^[-.]+|[-.]+$/g, "").slice(0, 60);
  return ["inward-report", day, own].filter((part) => part !== "").join("-");
}
