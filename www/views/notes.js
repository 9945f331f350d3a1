/** What the engine assumed or noticed while it read the inputs. */

import { typeset } from "../text/figures.js";
import { word } from "../text/words.js";
import { make, need } from "./element.js";

/** @import { Session } from "../session/session.js" */

/** @param {ReportNote} note */
function noteElement(note) {
  const element = make("li", "", { class: `note-${note.severity}` });
  if (note.severity === "warning") element.append(make("strong", `${word("note.warning")}: `));
  element.append(typeset(note.message));
  return element;
}

/** @param {Session} session */
export function showNotes(session) {
  const list = need("notes", HTMLUListElement);
  session.watch(
    (state) => state.answer?.preamble.notes,
    (notes) => list.replaceChildren(...(notes?.length ? notes.map(noteElement) : [make("li", word("notes.none"))])),
  );
}
