/** What went wrong: a sentence, a next step, and details to copy. */

import { copyText } from "../export/out.js";
import { detailsText } from "../text/faults.js";
import { keptText, subjectText } from "../text/words.js";
import { confirmOn } from "./confirm.js";
import { need } from "./element.js";

/** @import { Session } from "../session/session.js" */

/** @param {Session} session */
export function showFailure(session) {
  const panel = need("failure", HTMLElement);
  const details = need("failure-details", HTMLElement);
  const copy = need("copy-details", HTMLButtonElement);
  copy.addEventListener("click", async () => confirmOn(copy, await copyText(details.textContent ?? "")));
  need("failure-dismiss", HTMLButtonElement).addEventListener("click", () => {
    session.dismiss();
    need("main", HTMLElement).focus();
  });

  session.watch(
    (state) => state.failure,
    (failure, state) => {
      panel.hidden = failure === null;
      need("failure-message", HTMLElement).textContent = failure?.message ?? "";
      need("failure-hint", HTMLElement).textContent = failure?.hint ?? "";
      const kept = need("failure-kept", HTMLElement);
      kept.hidden = state.answer === null;
      kept.textContent = state.answer === null ? "" : keptText(subjectText(state.answer));
      if (failure !== null && !(document.activeElement instanceof HTMLTextAreaElement))
        panel.scrollIntoView({ block: "nearest" });
      details.textContent = failure === null ? "" : detailsText(failure, state.program);
    },
  );
}
