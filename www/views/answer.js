/** The answer in a sentence, first and largest, and the frame around everything that belongs to it. */

import { typeset } from "../text/figures.js";
import { subjectText, word } from "../text/words.js";
import { make, need, speak } from "./element.js";
import { dropOrphanedNote, withTerms } from "./terms.js";

/** @import { Session } from "../session/session.js" */

/** The first sentence is the answer; what follows explains it and is set smaller. @param {string} text */
function splitSentence(text) {
  const end = text.search(/\.\s+\p{Lu}/u);
  return end < 0 ? [text] : [text.slice(0, end + 1), text.slice(end + 1)];
}

/** @param {Session} session */
export function showAnswer(session) {
  const sentence = need("sentence", HTMLElement);
  const hint = need("sentence-hint", HTMLElement);

  session.watch(
    (state) => state.answer === null,
    (empty) => {
      need("empty", HTMLElement).hidden = !empty;
    },
    "first",
  );
  session.watch(
    // A map without a sheet says why by its own error.
    (state) => state.answer?.sheet ?? state.answer?.maps[state.answer.chosen],
    (_, { answer }) => {
      const sheet = answer?.sheet;
      need("answer", HTMLElement).hidden = answer === null;
      need("fitted", HTMLElement).hidden = !sheet;
      if (answer === null) return;
      need("subject", HTMLElement).textContent = subjectText(answer);
      const map = answer.maps[answer.chosen];
      const text = sheet?.sentence ?? (map !== undefined && "error" in map ? `${map.name}: ${map.error.message}` : "");
      const told = new Set();
      const before = sentence.textContent ?? "";
      sentence.replaceChildren(
        ...splitSentence(text).map((part, at) => {
          const element = make("span", "", { class: at === 0 ? "first" : "rest" });
          element.append(...withTerms(typeset(part), told));
          return element;
        }),
      );
      dropOrphanedNote();
      // What was said before is not said again.
      speak(splitSentence(typeset(text)).find((part) => !before.includes(part)) ?? word("answer.unchanged"));
      hint.textContent = !sheet && map !== undefined && "error" in map ? map.error.hint : "";
      hint.hidden = hint.textContent === "";
    },
    "first",
  );
}
