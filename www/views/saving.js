/** Saving the work, and a warning before what is not saved is lost. */

import { saveBlob } from "../export/out.js";
import { isEmpty } from "../session/inputs.js";
import { word } from "../text/words.js";
import { need } from "./element.js";

/** @import { Session } from "../session/session.js" */

/** @param {Session} session */
export function showSaving(session) {
  const place = need("work", HTMLElement);
  const button = need("save-work", HTMLButtonElement);
  button.addEventListener("click", async () => {
    button.disabled = true;
    try {
      saveBlob(await session.work(), "inward-work.json");
      session.noteSaved();
    } catch (error) {
      session.fail(error);
    } finally {
      button.disabled = false;
    }
  });
  const names = need("work-names", HTMLInputElement);
  names.addEventListener("change", () => session.showNames(names.checked));
  session.watch(
    ({ namesShown }) => namesShown,
    (shown) => {
      names.checked = shown;
    },
  );

  const said = need("work-state", HTMLElement);
  session.watch(
    ({ decompositions }) => decompositions.every(({ inputs }) => isEmpty(inputs)),
    (empty) => {
      place.hidden = empty;
    },
  );
  session.watch(
    // An invented map by itself is never lost.
    () => (!session.hasOwnWork() ? "" : session.isUnsaved() ? "work.unsaved" : "work.saved"),
    (code) => {
      said.textContent = code === "" ? "" : word(code);
    },
  );
  addEventListener("beforeunload", (event) => {
    if (session.isUnsaved()) event.preventDefault();
  });
}
