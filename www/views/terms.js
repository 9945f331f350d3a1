/**
 * A line of explanation at every term: the word is a button that opens it below the paragraph it stands in, and
 * closes it again. All terms stand once more at the foot of the page.
 */

import { termOf, termPieces, TERMS } from "../text/terms.js";
import { word } from "../text/words.js";
import { make, need, speak } from "./element.js";

const NOTE_ID = "term-note";
/** Where a note may be appended inside; it is put after any other block. */
const WITHIN = "li,td,th,dd,fieldset,figure,summary";

/**
 * Text with its terms as buttons. A button of the browser's own does not break over lines as words do.
 * @param {string} text
 * @param {Set<string>} [told] terms marked before, in the same part of the page
 * @returns {Node[]}
 */
export function withTerms(text, told = new Set()) {
  return termPieces(text, told).map((piece) =>
    piece.code === null
      ? document.createTextNode(piece.text)
      : make("span", piece.text, {
          role: "button",
          tabindex: "0",
          class: "term",
          "data-term": piece.code,
          "aria-expanded": "false",
        }),
  );
}

function closeNote() {
  document.getElementById(NOTE_ID)?.remove();
  for (const open of document.querySelectorAll(".term[aria-expanded=true]")) {
    open.setAttribute("aria-expanded", "false");
    open.removeAttribute("aria-controls");
  }
}

/** @param {EventTarget | null} target @returns {Element | null} */
function termAt(target) {
  return target instanceof Element ? target.closest(".term") : null;
}

/** @param {Element} button */
function toggleNote(button) {
  if (button.getAttribute("aria-expanded") === "true") closeNote();
  else openNote(button);
}

/** @param {Element} button */
function openNote(button) {
  closeNote();
  const term = termOf(button.getAttribute("data-term") ?? "");
  const note = make("p", "", { id: NOTE_ID, class: "term-note" });
  note.append(make("strong", term.words[0]), ` ${term.line}`);
  const block = button.closest(`${WITHIN},p,h2,h3,div`);
  if (block === null) return;
  if (block.matches(WITHIN)) block.append(note);
  else block.after(note);
  button.setAttribute("aria-expanded", "true");
  button.setAttribute("aria-controls", NOTE_ID);
  speak(`${term.words[0]}: ${term.line}`);
}

export function showTerms() {
  for (const button of document.querySelectorAll("button.term")) button.setAttribute("aria-expanded", "false");
  document.addEventListener("click", (event) => {
    const button = termAt(event.target);
    if (button === null) return;
    event.preventDefault();
    toggleNote(button);
  });
  document.addEventListener("keydown", (event) => {
    if (event.key === "Escape") closeNote();
    const button = termAt(event.target);
    if (button === null || button instanceof HTMLButtonElement || !["Enter", " "].includes(event.key)) return;
    event.preventDefault();
    toggleNote(button);
  });
  const list = need("glossary-list", HTMLElement);
  for (const term of [...TERMS].sort((a, b) => a.words[0].localeCompare(b.words[0], "en"))) {
    list.append(make("dt", term.words[0]), make("dd", term.line));
  }
  need("glossary-title", HTMLElement).textContent = word("glossary");
}

/** A note whose word has left the page goes with it. */
export function dropOrphanedNote() {
  if (document.getElementById(NOTE_ID) !== null && document.querySelector(".term[aria-expanded=true]") === null)
    closeNote();
}
