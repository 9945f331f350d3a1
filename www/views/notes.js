/** What the engine assumed or noticed while it read the inputs. */

import { typeset } from "../text/figures.js";
import { word } from "../text/words.js";
import { make, need } from "./element.js";
import { dropOrphanedNote, withTerms } from "./terms.js";

/** @import { Session } from "../session/session.js" */

/** @param {ReportNote} note @param {Set<string>} told */
export function noteElement(note, told) {
  const element = make("li", "", { class: `note-${note.severity}` });
  if (note.severity === "warning") element.append(make("strong", `${word("note.warning")}: `));
  element.append(...withTerms(typeset(note.message), told));
  return element;
}

/** @param {Session} session */
export function showNotes(session) {
  const list = need("notes", HTMLUListElement);
  const warned = need("warned", HTMLElement);
  session.watch(
    (state) => state.answer?.preamble.notes,
    (notes) => {
      const told = new Set();
      const warnings = (notes ?? []).filter(({ severity }) => severity === "warning");
      warned.hidden = warnings.length === 0;
      need("warned-notes", HTMLElement).replaceChildren(
        ...warnings.map((note) => noteElement(note, new Set())),
      );
      list.replaceChildren(
        ...(notes?.length ? notes.map((note) => noteElement(note, told)) : [make("li", word("notes.none"))]),
      );
      dropOrphanedNote();
    },
  );
}
