/** One line on what the page is at, with progress and a way to stop. */

import { progressText, word } from "../text/words.js";
import { need } from "./element.js";

/** @import { Session } from "../session/session.js" */

/** @param {SessionState} state */
function statusText(state) {
  if (state.progress !== null) return progressText(state.progress.done, state.progress.total);
  if (state.stopped) return word("state.stopped");
  if (state.phase === "ready" && state.inputs.electrodes !== null) return word("state.waiting");
  return word(`state.${state.phase}`);
}

/** Quicker work beside an answer is not worth a word. */
const QUICK_MS = 300;

/** @param {Session} session */
export function showStatus(session) {
  const status = need("status", HTMLElement);
  const progress = need("progress", HTMLProgressElement);
  const cancel = need("cancel", HTMLButtonElement);
  cancel.addEventListener("click", () => {
    session.cancel();
    need("main", HTMLElement).focus();
  });

  session.watch(
    (state) => state.phase,
    (phase) => {
      document.documentElement.dataset.state = phase;
    },
  );
  let slow = false;
  let timer = 0;
  const show = () => {
    const state = session.read();
    const busy = state.phase === "busy" || state.progress !== null;
    if (!busy) {
      clearTimeout(timer);
      timer = 0;
      slow = false;
    } else if (timer === 0) {
      timer = setTimeout(() => {
        slow = true;
        show();
      }, QUICK_MS);
    }
    const working = busy && (slow || state.answer === null);
    if (busy && !working) return;
    const text = statusText(state);
    // Counts change many times a second; a screen reader hears of the beginning and the end.
    status.setAttribute("aria-live", state.progress === null ? "polite" : "off");
    if (status.textContent !== text) status.textContent = text;
    status.classList.toggle("unseen", state.phase === "answered" && !working && !state.stopped);
    cancel.hidden = !working;
    progress.hidden = !working;
    if (state.progress === null) progress.removeAttribute("value");
    else progress.value = state.progress.done / state.progress.total;
  };
  session.watch((state) => state, show);
}
