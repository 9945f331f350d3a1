/** What the last change has moved aside, and the way back. */

import { isTextField } from "../intake/drop.js";
import { saidText, settingsText, word } from "../text/words.js";
import { need } from "./element.js";

/** @import { Session } from "../session/session.js" */

/** @param {Session} session */
export function showUndo(session) {
  const line = need("undo-line", HTMLElement);
  const button = need("undo", HTMLButtonElement);
  const back = () => {
    const { past } = session.read();
    if (past.length === 0) return;
    session.undo();
    need("said", HTMLElement).textContent = `${word("undone")}: ${settingsText(past[past.length - 1].what)}.`;
    if (past.length === 1) need("main", HTMLElement).focus({ preventScroll: true });
  };
  button.addEventListener("click", back);
  const sphering = need("take-sphering", HTMLButtonElement);
  sphering.addEventListener("click", () => {
    session.takeAsSphering();
    button.focus();
  });
  const both = need("keep-both", HTMLButtonElement);
  both.addEventListener("click", () => {
    session.keepBoth();
    button.focus();
  });
  document.addEventListener("keydown", (event) => {
    const wanted = (event.ctrlKey || event.metaKey) && !event.shiftKey && !event.altKey && event.key === "z";
    // A text field has an undo of its own.
    if (!wanted || isTextField(event.target)) return;
    event.preventDefault();
    back();
  });
  session.watch(
    (state) => state.past,
    (past) => {
      line.hidden = past.length === 0;
      button.textContent = past.length === 0 ? word("undo") : `${word("undo")}: ${settingsText(past[past.length - 1].what)}`;
    },
  );
  session.watch(
    ({ past, said }) => said ?? past,
    (_, { said }) => {
      need("said", HTMLElement).textContent = said === null ? "" : saidText(said);
      sphering.hidden = said?.sphering === undefined;
      both.hidden = said?.former === undefined;
      // Who dropped files further down sees what became of them.
      if (said !== null && !need("intake", HTMLElement).contains(document.activeElement)) line.scrollIntoView({ block: "nearest" });
    },
  );
}
