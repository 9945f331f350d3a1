/** What went wrong: a sentence, a next step, and details to copy. */

import { copyText } from "../export/out.js";
import { detailsText } from "../text/faults.js";
import { keptText, subjectText, word } from "../text/words.js";
import { confirmOn } from "./confirm.js";
import { need } from "./element.js";

/** @import { Session } from "../session/session.js" */

/** @param {SessionState} state */
function comesFromHead({ answer, changed }) {
  return answer !== null && changed.includes("head");
}

/** Whether someone types, or works where the failure is said too. @param {Element | null} element */
function underHands(element) {
  return element !== null && element.matches("textarea, #electrode-list *, .disc, .head-edit *");
}

/** @param {Session} session */
export function showFailure(session) {
  const panel = need("failure", HTMLElement);
  const details = need("failure-details", HTMLElement);
  const copy = need("copy-details", HTMLButtonElement);
  copy.addEventListener("click", async () => confirmOn(copy, await copyText(details.textContent ?? "")));
  const restore = need("failure-restore", HTMLButtonElement);
  restore.addEventListener("click", () => {
    const near = panel.closest("details")?.querySelector("summary") ?? need("main", HTMLElement);
    session.restore();
    near.focus({ preventScroll: true });
  });
  need("failure-dismiss", HTMLButtonElement).addEventListener("click", () => {
    session.dismiss();
    need("main", HTMLElement).focus();
  });

  session.watch(
    (state) => state.failure,
    (failure, state) => {
      panel.hidden = failure === null;
      // What comes from the head is said beside the head.
      const place = need(failure !== null && comesFromHead(state) ? "head-failure" : "failure-place", HTMLElement);
      if (panel.parentElement !== place) place.append(panel);
      const { answer } = state;
      const others = answer !== null && state.inputs !== answer.inputs;
      restore.hidden = answer === null || (!others && state.settings === answer.settings);
      restore.textContent = word(others ? "failure.restore-input" : "failure.restore");
      need("failure-message", HTMLElement).textContent = failure?.message ?? "";
      need("failure-hint", HTMLElement).textContent = failure?.hint ?? "";
      const kept = need("failure-kept", HTMLElement);
      kept.hidden = state.answer === null;
      kept.textContent = state.answer === null ? "" : keptText(subjectText(state.answer));
      if (failure !== null && !underHands(document.activeElement)) panel.scrollIntoView({ block: "nearest" });
      details.textContent = failure === null ? "" : detailsText(failure, state.program);
    },
  );
}
