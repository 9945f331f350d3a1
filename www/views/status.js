/** One line on what the page is at, with progress and a way to stop. */

import { isEmpty, namedFiles } from "../session/inputs.js";
import { progressText, waitingText, word } from "../text/words.js";
import { need } from "./element.js";

/** @import { Session } from "../session/session.js" */

/** Files are in, and no map. @param {SessionState} state */
function isWaiting({ phase, inputs, progress, stopped, arriving }) {
  return phase === "ready" && progress === null && !arriving && !stopped && !isEmpty(inputs);
}

/** @param {SessionState} state */
function statusText(state) {
  if (state.progress !== null) return progressText(state.progress);
  if (state.arriving) return word("state.arriving");
  if (state.stopped) return word("state.stopped");
  if (isWaiting(state)) return waitingText(namedFiles(state.inputs));
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

  const rest = need("fit-rest", HTMLButtonElement);
  rest.addEventListener("click", () => {
    session.fitRest();
    need("main", HTMLElement).focus();
  });

  /** @param {Phase} phase */
  const say = (phase) => {
    document.documentElement.dataset.state = phase;
  };
  // That it is at work is said at once, what came of it when all views show it.
  session.watch((state) => state.phase === "busy", (busy) => busy && say("busy"), "first");
  let slow = false;
  let timer = 0;
  const show = () => {
    const state = session.read();
    say(state.phase);
    const busy = state.phase === "busy" || state.progress !== null || state.arriving;
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
    // Without an answer yet, this is all that tells of tables that are in.
    status.classList.toggle("small", !isWaiting(state));
    status.classList.toggle("unseen", state.phase === "answered" && !working && !state.stopped);
    // Reading cannot be given up.
    cancel.hidden = !working || (state.phase !== "busy" && state.progress === null);
    rest.hidden = working || !state.stopped || !session.hasUnfinished();
    progress.hidden = !working;
    if (state.progress === null) progress.removeAttribute("value");
    else progress.value = state.progress.done / state.progress.total;
  };
  session.watch((state) => state, show);
}
