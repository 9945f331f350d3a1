/** Every sentence of the page, by code. */

/** @type {Record<string, string>} */
const WORDS = {
  title: "Inward",
  tagline: "One equivalent dipole for one EEG scalp map",
  private: "Nothing leaves this machine",
  skip: "Skip to the answer",

  "empty.what": "Does one equivalent dipole explain this scalp map, where would it lie, and what is left over?",
  "empty.how":
    "Give a map as a table: paste it, drop it anywhere on this page, or pick a file. The answer comes by itself.",
  "empty.private": "Everything is computed in this tab. Nothing is sent, stored or looked up.",
  "empty.maps": "A map: label and value, one electrode a line; further columns are further maps",
  "empty.electrodes": "Electrode positions, if measured: label, x, y, z",

  intake: "Input",
  "intake.change": "Change input",
  "intake.fold": "Fold away",
  maps: "Map",
  "maps.hint": "Label and value, one electrode a line. More columns are more maps.",
  electrodes: "Electrodes",
  "electrodes.hint": "Label, x, y, z, or labels alone. Without a table: standard positions by the map’s labels.",
  pick: "Pick a file",
  clear: "Clear",
  unit: "Unit of the map",
  "unit.relative": "relative",
  "unit.uV": "µV",
  "unit.V": "V",
  "slot.none": "none yet",
  "slot.standard": "standard positions",
  "slot.pasted": "pasted",
  "slot.pasted-electrodes": "pasted electrodes",
  "slot.large": "This file is too long to show here.",
  "slot.maps-misplaced": "This reads like an electrode table.",
  "slot.electrodes-misplaced": "This reads like a map.",
  "slot.maps-move": "Use as electrodes",
  "slot.electrodes-move": "Use as map",
  drop: "Drop a map, an electrode table, or both",

  "state.loading": "Starting the engine",
  "state.ready": "Ready for a map",
  "state.waiting": "Electrodes are in; now the map",
  "state.busy": "Computing",
  "state.answered": "Answered",
  "state.failed": "That did not work",
  "state.stopped": "Stopped",
  cancel: "Stop",

  choice: "Map of the table",
  "choice.previous": "Previous map",
  "choice.next": "Next map",
  "choice.number": "Number in the table",
  "choice.unfitted": "not fitted",

  answer: "Answer",
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
  "scale.shared": "One scale for all three",
  "scale.lines": "Lines: solid positive, dashed negative",

  numbers: "Numbers",
  "numbers.quantity": "Quantity",
  "numbers.value": "Value",
  "numbers.unit": "Unit",
  "numbers.meaning": "Meaning",
  copy: "Copy table",
  copied: "Copied",
  "copy.failed": "The browser does not allow copying here",
  json: "Download report (JSON)",

  notes: "What was assumed",
  "notes.none": "Nothing beyond the standard head.",
  "note.warning": "Note well",

  caution: [
    "For research only. Inward is not a medical device and gives no medical advice;",
    "where a person’s care is concerned, licensed practice and local rules decide.",
  ].join(" "),

  "failure.details": "Details to copy",
  "failure.copy": "Copy details",
  "failure.dismiss": "Close",

  notices: "Licences of what is built in",
};

/** @param {string} code */
export function word(code) {
  const text = WORDS[code];
  if (text === undefined) throw new TypeError(`no text for ${code}`);
  return text;
}

/** @param {number} done @param {number} total */
export function progressText(done, total) {
  return `${done.toLocaleString("en-GB")} of ${total.toLocaleString("en-GB")} maps fitted`;
}

/** @param {number} count @param {boolean} later */
export function furtherText(count, later) {
  return `${count.toLocaleString("en-GB")} ${later ? "later" : "earlier"} maps`;
}

/** @param {string} subject what the answer is for */
export function keptText(subject) {
  return `The previous answer (${subject}) is still shown below.`;
}

/** Which map of which inputs. @param {Answer} answer */
export function subjectText({ names, maps, chosen }) {
  const map = names.maps || word("slot.pasted");
  const electrodes =
    names.electrodes === null ? word("slot.standard") : names.electrodes || word("slot.pasted-electrodes");
  return [maps[chosen]?.name, map, electrodes].filter((part) => part).join(" · ");
}

/** @param {string} stretch the left-over map's own factor, or empty */
export function scaleText(stretch) {
  const shared =
    stretch === "" ? word("scale.shared") : `${word("scale.shared")}; ${word("map.residual")} drawn ${stretch}`;
  return `${shared}. ${word("scale.lines")}.`;
}

/** Writes the page's own sentences where the template names their codes. @param {ParentNode} root */
export function writeWords(root) {
  for (const element of root.querySelectorAll("[data-text]")) {
    element.textContent = word(element.getAttribute("data-text") ?? "");
  }
  for (const element of root.querySelectorAll("[data-label]")) {
    element.setAttribute("aria-label", word(element.getAttribute("data-label") ?? ""));
  }
}
