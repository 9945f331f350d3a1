/** The foot of the page: which program this is, and the licences of what is built in. */

import { programText } from "../text/faults.js";
import { unpackedText } from "../text/packed.js";
import { need } from "./element.js";

/** @import { Session } from "../session/session.js" */

/** @param {Session} session */
export function showColophon(session) {
  session.watch(
    (state) => state.program,
    (program) => {
      need("program", HTMLElement).textContent = program === null ? "" : programText(program);
    },
  );
  const notices = need("notices", HTMLDetailsElement);
  notices.addEventListener("toggle", () => {
    const carried = need("notices-text", HTMLScriptElement).text;
    need("notices-shown", HTMLElement).textContent = unpackedText(carried);
  });
}
