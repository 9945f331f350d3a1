/** Every sentence of the page, by code. */

import { enteredText, leftText, NO_BREAK, percentText, shortName, timeText, typeset } from "./figures.js";
import { HOST_WORDS } from "./host.js";
import { SEAL_WORDS } from "./sealed.js";
import { COURSE_WORDS } from "./courses.js";
import { REPORT_WORDS } from "./report.js";
import { beginning, TRUST_WORDS } from "./trust.js";

/** @type {Record<string, string>} */
const WORDS = {
  ...TRUST_WORDS,
  ...COURSE_WORDS,
  ...HOST_WORDS,
  ...SEAL_WORDS,
  ...REPORT_WORDS,
  title: "Inward",
  tagline: "One equivalent dipole for one EEG scalp map",
  private: "Nothing leaves this machine",
  skip: "Skip to the answer",

  "empty.what": "Does one equivalent dipole explain a scalp map, where would it lie, and what is left over?",
  "empty.how":
    "Give a map as a table, or work that you saved: paste it, drop it anywhere on this page, or pick a file. The answer comes by itself.",
  "empty.private": "Everything is computed in this tab. Nothing is sent, stored or looked up.",
  "empty.examples": "Begin with an invented map",
  "empty.tables": "Or with tables like these",
  "empty.maps": "A map: label and value, one electrode a line; further columns are further maps",
  "empty.electrodes": "Electrode positions, if measured: label, x, y, z",

  intake: "Input",
  "intake.change": "Change input",
  "intake.fold": "Fold away",
  examples: "Invented maps to try",
  "examples.now": "shown now",
  "set-aside.back": "Take them back",
  maps: "Map",
  "maps.hint": "Label and value, one electrode a line. More columns are more maps.",
  electrodes: "Electrodes",
  "electrodes.hint": "Label, x, y, z, or labels alone. Without a table: standard positions by the map’s labels.",
  pick: "Pick a file",
  clear: "Clear",
  unit: "Unit of the maps",
  "unit.hint": "Holds for every map of the table. Without a unit, strengths are relative.",
  "unit.relative": "relative",
  "unit.uV": "µV",
  "unit.V": "V",
  "slot.none": "none yet",
  "slot.standard": "standard positions",
  "slot.beside": "in the same file",
  "slot.pasted": "pasted",
  "slot.pasted-electrodes": "pasted electrodes",
  "slot.unshown": "Too long to show here, or no text.",
  "slot.maps-misplaced": "This reads like an electrode table.",
  "slot.electrodes-misplaced": "This reads like a map.",
  "slot.maps-move": "Use as electrodes",
  "slot.electrodes-move": "Use as map",
  drop: "Drop maps, electrodes and what belongs to them, in any order",
  others: "Further files",
  "others.hint": "Any number of files in any order, told apart by what is in them: maps, electrodes, coordinate system, channels, labels, sphering matrix.",
  "pick.several": "Pick files",
  "pick.sphering": "Pick the sphering matrix",
  remove: "Remove",
  undo: "Undo",
  undone: "Undone",
  "undo.both": "Keep both",
  "undo.sphering": "It is the sphering matrix of the former",
  automatic: "automatic",

  "state.loading": "Starting the engine",
  "state.ready": "Ready for a map",
  "state.busy": "Computing",
  "state.arriving": "Reading files",
  "state.answered": "Answered",
  "state.failed": "That did not work",
  "state.stopped": "Stopped",
  "fit-rest": "Fit the rest",
  cancel: "Stop",

  "choice.previous": "Previous map of the list",
  "choice.next": "Next map of the list",
  "choice.number": "Number in the table",

  work: "Saved work",
  "work.hint": "One file with everything put in and chosen. Drop it here again, and the session is as it was. Nothing is kept by the browser.",
  "work.save": "Save work",
  "work.names": "with names of files and people",
  "work.unsaved": "Not saved yet: it goes with this tab.",
  "work.saved": "Saved as it stands.",
  decompositions: "Decompositions",
  "decompositions.add": "Add a decomposition",
  "decomposition.name": "Name of the decomposition",
  "decomposition.open": "Show",
  "decomposition.now": "Shown",
  "decomposition.more": "Subject and information",
  "decomposition.subject": "Subject",
  "decomposition.subject-hint": "Whose recording it is. Decompositions of one name and several subjects are compared over subjects.",
  "decomposition.information": "Reduction of mutual information",
  "decomposition.information-hint": "Where you have it from elsewhere, in whatever unit it is the same for all. A number; decimals after a point or a comma.",

  overview: "Maps",
  "ledger.grouping": "Group by",
  "ledger.order": "Sort by",
  "ledger.rv-short": "RV",
  "ledger.number": "number",
  "ledger.depth": "depth",
  "ledger.strength": "strength",
  "ledger.region": "region",
  "ledger.none": "nothing",
  "ledger.most": "RV at most",
  "ledger.slider": "Most residual variance of the maps listed",
  "ledger.nothing": "No map is left by these limits.",
  "ledger.how": "In the list: arrow keys, or type a number or the beginning of a name; Enter goes to the answer.",
  "band.0": "At most 5 %",
  "band.1": "Over 5 to 10 %",
  "band.2": "Over 10 to 15 %",
  "band.3": "Over 15 %",
  unfitted: "Not fitted",
  "ledger.boundary": "at the edge",

  table: "Table of all numbers",
  "table.hint": "Sorted by its heads. A copy is rounded as shown; files have all digits, residual variance as a fraction.",
  "table.number": "No.",
  "table.csv": "CSV",
  "table.tsv": "TSV",
  "table.json": "JSON",

  answer: "Answer",
  "answer.unchanged": "The answer in words is unchanged.",
  "answer.assumed": "See what was understood, and change it",
  "maps.title": "Measured, one dipole, left over",
  "map.measured": "measured",
  "map.projected": "one dipole",
  "map.residual": "left over",
  "map.minus": "minus",
  "map.equals": "equals",
  "map.front": "front",
  "map.left": "L",
  "map.right": "R",
  "map.above": "seen from above",
  flip: "Turn the sign",
  polarity: "Polarity",
  "polarity.arbitrary": "arbitrary: an axis",
  "polarity.declared": "declared: an arrow",
  "sign.arbitrary": "A component’s sign is arbitrary, so the dipole has an axis and no direction until you declare the polarity.",
  "sign.undeclared": "The dipole has an axis and no direction until you declare that the sign of these maps is the true one.",
  "sign.declared": "The sign as shown is declared to be the true one, for every map of the table.",
  "sign.turned": "The sign of this map is turned; turn it again for the sign of the table.",
  "map.back": "back",
  "scale.shared": "One scale for all three",
  "scale.lines": "Lines: solid positive, dashed negative",

  "electrode.hint": [
    "Point at an electrode, or go from one to the next with the arrow keys, to read its values.",
    "A click or Space leaves it out or takes it back.",
  ].join(" "),
  "electrode.map": "Map with electrodes",
  "electrode.share": "of what is left over",
  "electrode.part": "share",
  "electrode.no-value": "no value in this map",
  "electrode.out": "left out",
  "electrode.list": "Electrodes one by one",
  "electrode.values": "Values at the electrodes",
  "electrode.use": [
    "Those without a tick are left out of the fit; their values are shown for comparison.",
    "Share: an electrode’s part of the left-over power. In the list, arrow keys go from one to the next.",
  ].join(" "),
  "electrode.order": "Sort by",
  "electrode.order.misfit": "misfit",
  "electrode.order.label": "label",
  "electrode.order.table": "table order",
  "electrode.label": "electrode",
  "electrode.back": "Take all back",
  "electrode.restore": "Back to the answer shown",

  where: "Where the equivalent dipole lies",
  "where.axis": "The dipole is drawn as an axis, without direction.",
  "where.arrow": "The arrow runs from the negative to the positive pole.",
  "where.lines": "Circles are the shells of the model; the dotted line runs from the dipole straight out to the scalp.",
  "where.turn": "Drag, or use the arrow keys",
  "view.above": "seen from above",
  "view.behind": "seen from behind",
  "view.left": "seen from the left (L)",
  "view.turned": "Head to be turned",
  "turn.left": "Turn left",
  "turn.right": "Turn right",
  "turn.up": "Tilt up",
  "turn.down": "Tilt down",
  "turn.back": "Back to start",

  numbers: "Numbers",
  "numbers.quantity": "Quantity",
  "numbers.value": "Value",
  "numbers.unit": "Unit",
  "numbers.meaning": "Meaning",
  copy: "Copy table",
  copied: "Copied",
  "copy.failed": "The browser does not allow copying here",
  json: "Download report (JSON)",
  "shares.json": "Download all decompositions (JSON)",

  activation: "Standard deviation of the activation",
  "activation.meaning": "Of this component, in the units that go with its map. With it, the strength is that of one standard deviation and compares between components.",
  "activation.clear": "Clear",
  "activation.invalid": "A number above zero, please; decimals after a point or a comma.",

  head: "Head:",
  "head.numbers": "Numbers of the head",
  "head.change": "Change the head",
  "head.choices": "Published heads",
  "head.edited": "Edited by hand",
  "head.edited-hint": "Shells of your own, below.",
  "head.shells": "Shells, from the inside out",
  "head.shells-hint": "Ratio: outer radius over that of the scalp, rising to 1. Conductivity in siemens per metre.",
  "head.tissue": "Tissue",
  "head.ratio": "Ratio",
  "head.conductivity": "S/m",
  "head.remove": "Remove",
  "head.add": "Add a shell",
  "head.new": "new shell",
  "head.sphere": "Sphere",
  "head.sphere-hint": "In the table’s frame, in millimetres. What is left empty is fitted to the electrodes.",
  "head.x": "Centre x, mm",
  "head.y": "Centre y, mm",
  "head.z": "Centre z, mm",
  "head.radius": "Radius, mm",
  "head.standard": "Back to the standard head",
  "head.fitted": "Back to the fitted sphere",
  "head.shell-incomplete": "Each shell needs a ratio and a conductivity, as numbers; decimals after a point or a comma.",
  "head.centre-incomplete": "A centre needs all three numbers, x, y and z; leave all three empty to have it fitted.",
  "head.radius-invalid": "The radius is not a number.",

  glossary: "Words on this sheet",

  understood: "What was understood",
  "understood.head": "Electrodes on the head",
  "understood.mirror": "Exchange left and right of the positions",
  "understood.unusualHead": "Infant, skull defect or craniotomy",
  "understood.unusual-caution": "Then the standard shells do not hold: positions, depths and strengths may be far off.",
  "understood.interpolated": "Interpolated channels, divided by commas: no data, and not counted",
  "understood.laplacian": "Are the maps surface Laplacians (current densities)?",
  "understood.sphering": "Without its sphering matrix, where that is kept apart, an unmixing matrix gives wrong maps.",
  "understood.written": "Columns, fields and characters",
  "understood.unit": "Unit of the times",
  "understood.start": "start",
  "understood.step": "step",
  "understood.baseline": "Baseline, whose mean is subtracted",
  "understood.from": "from",
  "understood.to": "to",
  "from.setting": "your setting",
  "from.found": "found",
  "from.declared": "declared",
  "from.assumed": "assumed",
  "set.role": "What it is",
  "set.encoding": "Characters",
  "set.delimiter": "Fields are divided by",
  "set.decimal": "Decimals",
  "set.label": "Column of labels",
  "set.columns.label": "Electrodes: column of labels",
  "set.columns.x": "Electrodes: column of x",
  "set.columns.y": "Electrodes: column of y",
  "set.columns.z": "Electrodes: column of z",
  "set.angles.polar": "Polar angle",
  "set.angles.unit": "Angles are in",
  "set.orientation": "The table of maps has",
  "set.mapsAre": "The table holds",
  "set.units": "Positions are in",
  "set.laplacian": "The maps are surface Laplacians",

  notes: "What was assumed and noticed",
  "notes.none": "Nothing beyond the standard head.",
  "note.warning": "Note well",

  decomposition: "Decomposition",
  subject: "Subject",
  "figure.svg": "SVG",
  "figure.png": "PNG",
  "figure.save": "Save figure",
  "figure.width": "Width",
  "figure.page": "as on the page",
  "figure.resolution": "PNG pixels an inch",
  "figure.own-scales": "Each map on its own scale.",
  "figure.none": "Nothing is drawn yet.",

  shares: "Near-dipolar share",
  "shares.x": "x, residual variance (RV) in %",
  "shares.threshold": "Threshold",
  "shares.usual": "common practice",
  "shares.other": "or",
  "shares.scale": "Scale",
  "shares.log": "logarithmic",
  "shares.linear": "linear",
  "shares.most": "up to",
  "shares.handle": "Threshold of residual variance, percent",
  "shares.use": "Point at the figure to read it; drag the threshold, or move it with the arrow keys (with Shift by 0.1 %).",
  "shares.invalid": "A percentage from 0.1 to 100, please.",
  "shares.table": "Counts and medians",
  "shares.fitted": "Fitted",
  "shares.share": "Share, %",
  "shares.weighted": "Share of their variance, %",
  "shares.interval": "95 % interval",
  "shares.median": "Median RV, %",
  "shares.groups": "Mean shares over subjects, %",
  "shares.differences": "Differences of the share, paired by subject",
  "shares.pair": "Decompositions",
  "shares.subjects": "Subjects",
  "shares.difference": "Difference, points",
  information: "Mutual-information reduction and near-dipolar share",
  "information.y": "mutual-information reduction, as given",

  dipoles: "All dipoles in the head",
  "dipoles.views": "Head views with dipoles",
  "dipoles.of": "Dipoles of",
  "dipoles.one": "the map’s decomposition",
  "dipoles.all": "all decompositions",
  "dipoles.above": "Above the threshold",
  "dipoles.faint": "faint",
  "dipoles.hidden": "hidden",
  "dipoles.shown": "like the others",
  "dipoles.colour": "Colour",
  "dipoles.by-rv": "residual variance",
  "dipoles.by-series": "decomposition",
  "dipoles.rv": "residual variance",
  "dipoles.legend": "What the colours mean",
  "dipoles.radii": "Heads of different size: each is drawn in units of its own scalp radius.",
  "dipoles.use": "Click a dipole, or go from one to the next with the arrow keys.",
  "dipoles.open": "See its maps",

  match: "Maps that match",
  "match.hint": "One to one, so that the correlations of the scalp maps, taken without sign, add up to the most. Choose a pair to see both maps, each on its own scale.",
  "match.first": "First",
  "match.second": "Second",
  "match.pair": "Pair",
  "match.r": "Correlation, |r|",
  "match.sign": "Sign",
  "match.distance": "Dipoles apart, mm",
  "match.rv-a": "RV of the first, %",
  "match.rv-b": "RV of the second, %",
  "match.same": "Choose two different decompositions.",
  "match.busy": "Pairing",
  "match.turned": "sign turned, because r is negative",
  "match.unfitted": "not fitted",
  "match.open": "Open this map",

  caution: [
    "For research only. Inward is not a medical device and gives no medical advice;",
    "where a person’s care is concerned, licensed practice and local rules decide.",
  ].join(" "),

  "failure.help": "This may help",
  "failure.other": "If another table belongs to this one, give it next, or both together.",
  "failure.details": "Details to copy",
  "failure.copy": "Copy details",
  "failure.restore": "Back to the settings of the answer",
  "failure.restore-input": "Back to the input of the answer",
  "failure.dismiss": "Close",

  notices: "Licences of what is built in",
};

/** @param {string} code */
export function word(code) {
  const text = WORDS[code];
  if (text === undefined) throw new TypeError(`no text for ${code}`);
  return text;
}

/** What stands around a map. */
export const mapWords = () => ({ front: word("map.front"), left: word("map.left"), right: word("map.right"), above: word("map.above") });

/** Where a map is most positive and most negative, as shares of its width and height from the left and the front. @param {[number, number][]} ends */
export function extremesText(ends) {
  /** @param {[number, number]} end */
  const place = ([across, down]) => `${["front", "middle", "back"][Math.floor(3 * down)]}-${["left", "midline", "right"][Math.floor(3 * across)]}`;
  const [most, least] = ends.map(place);
  return `most positive ${most}, most negative ${least}`;
}

/** @param {{ width: number, height: number }} dots */
function dotsText({ width, height }) {
  return `${width.toLocaleString("en-GB")} × ${height.toLocaleString("en-GB")} pixels`;
}

/** @param {string} name @param {{ width: number, height: number } | null} dots */
export function figureSavedText(name, dots) {
  return `Saved as ${name}${dots === null ? "" : `, ${dotsText(dots)}`}.`;
}

/** @param {{ width: number, height: number }} dots */
export function tooManyDotsText(dots) {
  return `${dotsText(dots)} are more than browsers draw: choose a smaller width or resolution, or SVG.`;
}

/** @param {Progress} progress */
export function progressText({ done, total, left, about }) {
  const text = `${done.toLocaleString("en-GB")} of ${about ? "about " : ""}${total.toLocaleString("en-GB")} maps fitted`;
  return left === null ? text : `${text}, ${leftText(left)} left`;
}

/** @param {number} count @param {string} noun */
function countText(count, noun) {
  return `${count.toLocaleString("en-GB")}${NO_BREAK}${noun}${count === 1 ? "" : "s"}`;
}

/** Heading of a group of maps: a band of residual variance, a region, or those not fitted. @param {string} code @param {number} count */
export function groupText(code, count) {
  const title = beginning(WORDS[code] ?? code.replace("-", ", "));
  return typeset(`${title} · ${countText(count, "map")}`);
}

/** @param {number} listed @param {number} here fitted or refused so far @param {number} all */
export function listedText(listed, here, all) {
  if (here < all) return `${listed.toLocaleString("en-GB")} so far, of ${countText(all, "map")}`;
  return listed === all ? countText(all, "map") : `${listed.toLocaleString("en-GB")} of ${countText(all, "map")}`;
}

/** @param {number} at counted from 1, 0 for none @param {number} all */
export function stepText(at, all) {
  const count = all.toLocaleString("en-GB");
  return at === 0 ? "not in the list" : `${at.toLocaleString("en-GB")} of ${count} in the list`;
}

/** @param {number} most a fraction, or Infinity */
export function rvLimitText(most) {
  return most === Infinity ? "all maps" : `at most ${percentText(most)}`;
}

/** A number of a map with its unit, as the table has it. @param {MapRow} row @param {SessionState["columns"]} columns @param {string} code */
export function cellText(row, columns, code) {
  const at = columns.findIndex((column) => column.code === code);
  return at < 0 ? "" : `${row.cells[at]} ${symbolOf(columns[at].unit)}`.trim();
}

/**
 * Where a map's dipole lies, in few words.
 * @param {MapRow} row
 * @param {SessionState["columns"]} columns
 * @param {string} order what the list is sorted by
 */
export function dipolePlaceText(row, columns, order) {
  /** @param {string} code */
  const cell = (code) => cellText(row, columns, code);
  const place = row.nearest_site === null ? row.region.replace("-", ", ") : `under ${row.nearest_site}, ${row.side}`;
  return `${place}, ${order === "strength" ? cell("strength") : `${cell("depth")} deep`}`;
}

/**
 * What there is of a decomposition.
 * @param {{ subject: string, count: number, failure: Fault | null, counts: { here: number, fitted: number, within: number } | null, threshold: number, stopped: boolean }} facts
 */
export function decompositionText({ subject, count, failure, counts, threshold, stopped }) {
  const parts = subject === "" ? [] : [`subject ${shortName(subject)}`];
  if (counts === null) return [...parts, word(failure !== null ? "state.failed" : stopped ? "state.stopped" : "state.busy")].join(" · ");
  const { here, fitted, within } = counts;
  parts.push(here < count ? `${here.toLocaleString("en-GB")} of ${countText(count, "map")}` : countText(count, "map"));
  if (here > fitted) parts.push(`${(here - fitted).toLocaleString("en-GB")} not fitted`);
  if (fitted > 0) {
    parts.push(`RV at most ${enteredText(100 * threshold)} %: ${within.toLocaleString("en-GB")} (${Math.round((100 * within) / fitted)} %)`);
  }
  return typeset(parts.join(" · "));
}

/** What a button does, and to what. @param {string} action @param {string} name */
export function actionText(action, name) {
  return `${action}: ${shortName(name)}`;
}

/** @param {{ label: string, unit: string }} column */
export function columnHead({ label, unit }) {
  return unit === "" ? label : `${label} (${unit})`;
}

/** @param {number} more @param {number} left */
export function moreRowsText(more, left) {
  return `Show ${more.toLocaleString("en-GB")} more of ${left.toLocaleString("en-GB")} that are left`;
}

/** @param {number} count of names that begin like a formula */
export function guardText(count) {
  const names = count === 1 ? "1 name begins" : `${count.toLocaleString("en-GB")} names begin`;
  return `${names} with =, +, - or @. In copies, CSV and TSV an apostrophe stands before it, so that no spreadsheet takes it for a formula; JSON has it as it is.`;
}

/** @param {string} subject what the answer is for */
export function keptText(subject) {
  return `The answer (${subject}) stays as it is.`;
}

/** A map by its name, and by its time where the name is not that. @param {Answer} answer @param {number} index */
export function mapText({ maps, preamble }, index) {
  const { name } = maps[index] ?? { name: "" };
  const { times } = preamble.understood;
  const time = times?.times[index];
  const named = time === undefined || Number.parseFloat(name.replace(/^t[=_ ]*/i, "")) === time;
  return named ? shortName(name) : `${shortName(name)} · ${timeText(time, times?.unit ?? "")}`;
}

/** Which map of which inputs. @param {Answer} answer */
export function subjectText(answer) {
  const { names, chosen, example } = answer;
  const map = shortName(names.maps ?? "") || word("slot.pasted");
  const electrodes =
    names.electrodes === null ? word("slot.standard") : shortName(names.electrodes) || word("slot.pasted-electrodes");
  const invented = example === null ? "" : `invented example “${example.title}”${example.edited ? ", edited" : ""}`;
  const together = names.maps !== "" && names.electrodes === names.maps;
  return [mapText(answer, chosen), map, together ? "" : electrodes, invented].filter((part) => part).join(" · ");
}

/** @param {Inputs} inputs that an invented map has replaced */
export function setAsideText({ maps, electrodes, others }) {
  const inputs = [maps, electrodes, ...others].filter((input) => input !== null);
  const names = inputs.map((input) => shortName(input.name) || word("slot.pasted"));
  return `Your own data (${names.join(", ")}) are set aside while an invented map is shown.`;
}

/** @param {string} part @param {number} shell counted from 1 */
export function shellLabel(part, shell) {
  return `${word(`head.${part}`)}, shell ${shell}`;
}

/** A unit to stand at every value: a symbol; words would be noise there. @param {string} unit */
export function symbolOf(unit) {
  return unit.includes(" ") ? "" : unit;
}

/** @param {string} unit of the scale @param {string} stretch the left-over map's own factor, or empty */
export function scaleText(unit, stretch) {
  const shared = symbolOf(unit) === "" ? `${word("scale.shared")}, in ${unit}` : word("scale.shared");
  const own = stretch === "" ? "" : `; ${word("map.residual")} drawn ${stretch}`;
  return `${shared}${own}. ${word("scale.lines")}.`;
}

/**
 * The three values at an electrode, and its part of what is left over.
 * @param {SheetElectrode} electrode
 * @param {string} unit
 */
export function electrodeParts({ used, measured, projected, residual, share }, unit) {
  /** @param {string} role @param {string} value */
  const part = (role, value) => `${word(`map.${role}`)} ${value}${NO_BREAK}${symbolOf(unit)}`.trim();
  if (measured === "") return [word("electrode.no-value"), part("projected", projected), word("electrode.out")];
  return [
    part("measured", measured),
    part("projected", projected),
    part("residual", residual),
    used ? `${share} % ${word("electrode.share")}` : word("electrode.out"),
  ];
}

/** @param {SheetElectrode} electrode @param {string} unit */
export function electrodeText(electrode, unit) {
  return `${shortName(electrode.label)}: ${electrodeParts(electrode, unit).join(", ")}`;
}

/** @param {number} out @param {number} all */
export function leftOutText(out, all) {
  return out === 0 ? `All ${all} are used` : `${all - out} of ${all} are used`;
}

/** What became of an electrode. @param {SheetElectrode} electrode @param {SheetElectrode[]} electrodes */
export function usedText({ label, used }, electrodes) {
  const out = electrodes.filter((electrode) => !electrode.used).length;
  return `${shortName(label)} ${used ? "taken back" : "left out"}. ${leftOutText(out, electrodes.length)}.`;
}

/** Settings as they are spoken of. @type {Record<string, string>} */
const SETTING_NAMES = {
  input: "input",
  work: "saved work taken up",
  mapUnit: "unit of the maps",
  exclude: "electrodes left out",
  interpolated: "interpolated channels",
  axes: "axes",
  mirror: "left and right",
  unusualHead: "unusual head",
  laplacian: "surface Laplacians",
  head: "head",
  flip: "turned signs",
  polarity: "polarity",
  activationSd: "activations",
  files: "how files are read",
  units: "unit of the positions",
  orientation: "orientation of the table",
  mapsAre: "what the table holds",
  columns: "columns",
  angles: "angles",
  columnsAre: "what the maps are",
  times: "times",
  baseline: "baseline",
  errors: "errors of the fit",
  noise: "noise",
  sources: "sources of reference populations",
  limits: "limits of the verdict",
};

/** @param {string[]} names of settings */
export function settingsText(names) {
  return names.map((name) => SETTING_NAMES[name] ?? name).join(", ");
}

/** What went with the last change. @param {Said} said */
export function saidText({ replaced, dropped }) {
  const files = replaced.map((name) => shortName(name) || word("slot.pasted"));
  const parts = [];
  if (files.length > 0) parts.push(`Replaced: ${files.join(", ")}.`);
  if (dropped.length > 0) parts.push(`Settings of the earlier table were dropped: ${settingsText(dropped)}.`);
  return parts.join(" ");
}

/** @type {Record<FileRole, string>} */
const ROLE_NAMES = {
  electrodes: "electrodes",
  maps: "maps",
  "electrodes-and-maps": "electrodes and maps",
  labels: "list of labels",
  channels: "table of channels",
  coordinates: "description of coordinates",
  sphering: "sphering matrix",
  times: "list of times",
  unused: "not needed",
};

/** @param {FileRole} role */
export function roleText(role) {
  return ROLE_NAMES[role];
}

/** What is in while the map is missing. @param {{ name: string, input: Input }[]} files */
export function waitingText(files) {
  const known = files.map(({ name, input }) => `${shortName(name)} (${roleText(input.role ?? "electrodes")})`);
  return `Read: ${known.join(", ")}. Now give a map: paste it, drop it, or pick a file.`;
}

/** @type {Record<string, string>} */
const FORMATS = { "delimited-text": "Text table", json: "JSON", npy: "NumPy array", mat: "MATLAB file", zip: "Archive" };

/** @type {Record<string, string>} */
const ENCODINGS = {
  "utf-8": "UTF-8",
  "latin-1": "Latin-1",
  "utf-16le": "UTF-16, low byte first",
  "utf-16be": "UTF-16, high byte first",
};

/** @param {UnderstoodFile} facts */
export function factsText({ format, encoding, rows, columns, header }) {
  /** @param {number} count @param {string} noun */
  const counted = (count, noun) => `${count.toLocaleString("en-GB")}${NO_BREAK}${noun}${count === 1 ? "" : "s"}`;
  const parts = [FORMATS[format] ?? format];
  if (encoding !== null) parts.push(ENCODINGS[encoding] ?? encoding);
  parts.push(counted(rows, "row"), counted(columns, "column"));
  if (header) parts.push("with a header");
  return `${parts.join(", ")}.`;
}

/** Which columns mean what. @param {UnderstoodFile} facts */
export function columnText({ used, passed_over: passed }) {
  /** @param {UnderstoodFile["used"][number]} column */
  const named = ({ column, name }) => (name === "" ? String(column) : `${column} “${shortName(name)}”`);
  const values = used.filter((column) => column.as === "value");
  const parts = used.filter((column) => column.as !== "value").map((column) => `${named(column)} ${column.as}`);
  if (values.length > 0) parts.push(`${values.map(named).join(" to ")} values`);
  const texts = [];
  if (parts.length > 0) texts.push(`Columns used: ${parts.join(", ")}.`);
  if (passed.length > 0) texts.push(`Passed over: ${listText(passed)}.`);
  return texts.join(" ");
}

/** The first of many words, and how many more there are. @param {string[]} words */
function listText(words) {
  const most = 12;
  const more = words.length > most ? ` and ${words.length - most} more` : "";
  return `${words.slice(0, most).map(shortName).join(", ")}${more}`;
}

/** What became of the labels, a line each. @param {UnderstoodLabels} labels */
export function labelLines(labels) {
  const renamed = labels.renamed.map(({ from, to }) => `${shortName(from)} as ${shortName(to)}`);
  /** @type {[string, string[]][]} */
  const lists = [
    ["Read as other names", renamed],
    ["Without a value", labels.without_value],
    ["Without a position", labels.without_position],
    ["Not on the scalp", labels.not_scalp],
    ["Interpolated", labels.interpolated],
    ["Reference", labels.reference === null ? [] : [labels.reference]],
  ];
  const lines = lists.filter(([, words]) => words.length > 0).map(([title, words]) => `${title}: ${listText(words)}.`);
  return [`With a position and a value: ${labels.matched}.`, ...lines];
}

/** When the maps are said to be, before other times are entered. @param {Understood["times"]} moments */
export function timesText(moments) {
  if (moments === null) return "Times of the maps: not known";
  const { times, unit } = moments;
  return `Times of the maps: ${timeText(times[0], "")} to ${timeText(times[times.length - 1], unit)}`;
}

/** @param {"above" | "left"} view @param {Record<string, string>} ends labels of the outermost electrodes */
export function previewText(view, { front, left, right, back, top }) {
  const ends = view === "above" ? `left ${left}, right ${right}` : `top ${top}`;
  return `Electrodes ${word(`view.${view}`)}: front ${front}, back ${back}, ${ends}`;
}

/** What lies in each quarter of a turn: straight ahead, and to either side of it. */
const QUARTERS = [
  { straight: "behind", less: "right of behind", more: "left of behind" },
  { straight: "the left", less: "behind the left", more: "before the left" },
  { straight: "the front", less: "left of the front", more: "right of the front" },
  { straight: "the right", less: "before the right", more: "behind the right" },
];

/**
 * From where the head is seen.
 * @param {number} turn degrees from behind by the left
 * @param {number} tilt degrees upwards
 */
export function standpointText(turn, tilt) {
  const [round, up] = [Math.round(turn) % 360, Math.round(tilt)];
  if (Math.abs(up) === 90) {
    const side = up > 0 ? "above" : "below";
    return `seen from ${side}${round === 0 ? "" : `, turned by ${round}°`}`;
  }
  const quarter = Math.round(round / 90);
  const beside = round - 90 * quarter;
  const { straight, less, more } = QUARTERS[quarter % 4];
  const level = beside === 0 ? straight : `${Math.abs(beside)}° ${beside < 0 ? less : more}`;
  return `seen from ${level}${up === 0 ? "" : `, ${Math.abs(up)}° ${up > 0 ? "above" : "below"}`}`;
}

/** What a share is of. @param {boolean} components */
export function noun(components) {
  return components ? "components" : "maps";
}

/** @param {string} counted what the share is of */
export function shareTitle(counted) {
  return `Share of ${counted} with RV at most x, in %`;
}

/** @param {string} counted @param {number} rv */
export function shareBelowText(counted, rv) {
  return `${counted[0].toUpperCase()}${counted.slice(1)} with ${shareAtText(rv)}`;
}

/** @param {number} rv */
export function shareAtText(rv) {
  return `RV at most ${enteredText(100 * rv)}${NO_BREAK}%`;
}

/** @param {number} drawn @param {number} all @param {string} limit or empty @param {string} above what those above it are */
export function dipoleCountText(drawn, all, limit, above) {
  const beyond = limit === "" ? "" : above === "hidden" ? ` (${limit})` : `; those above ${limit.replace("RV at most ", "RV ")} are faint`;
  return `${drawn} of ${all} fitted dipoles are drawn${beyond}.`;
}

/** @param {MapRow} row @param {string} decomposition or empty */
export function dipoleText({ name, rv, nearest_site: site, side }, decomposition) {
  const of = decomposition === "" ? "" : ` of ${shortName(decomposition)}`;
  const place = [site === null ? "" : `under ${site}`, side].filter((part) => part).join(", ");
  return `${shortName(name)}${of}: RV ${percentText(rv)}, ${place}`;
}

/** @param {Matches} matches */
export function matchedText({ electrodes, matches }) {
  return `${matches.length} ${matches.length === 1 ? "pair" : "pairs"}, by the ${electrodes} electrodes that both use.`;
}

/**
 * Who was left over, and why.
 * @param {Matches} matches
 * @param {Decomposition | undefined} a
 * @param {Decomposition | undefined} b
 */
export function unmatchedText({ unmatched_a, unmatched_b }, a, b) {
  /** @type {[number[], Decomposition | undefined, Decomposition | undefined][]} */
  const sides = [[unmatched_a, a, b], [unmatched_b, b, a]];
  return sides.flatMap(([left, own, other]) => {
    if (left.length === 0) return [];
    const names = listText(left.map((index) => own?.answer?.maps[index]?.name ?? ""));
    const fewer = (other?.answer?.count ?? 0) < (own?.answer?.count ?? 0);
    const unfitted = left.some((index) => "error" in (own?.answer?.maps[index] ?? {}));
    const few = fewer ? `${shortName(other?.name ?? "")} has fewer maps` : "no map is left that could be theirs";
    const why = unfitted ? `${few}, or they have no values to compare` : few;
    return [`Without a partner in ${shortName(other?.name ?? "")}: ${names} (${why}).`];
  });
}

/** Writes the page's own sentences where the template names their codes. @param {ParentNode} root */
export function writeWords(root) {
  for (const element of root.querySelectorAll("[data-text]")) {
    element.textContent = word(element.getAttribute("data-text") ?? "");
  }
  for (const element of root.querySelectorAll("[data-label]")) {
    element.setAttribute("aria-label", word(element.getAttribute("data-label") ?? ""));
  }
  for (const element of root.querySelectorAll("[data-description]")) {
    element.setAttribute("aria-roledescription", word(element.getAttribute("data-description") ?? ""));
  }
}
