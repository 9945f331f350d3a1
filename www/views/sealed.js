/** What the seal is worth and how to check it, with the digest of the file, which is computed when it is asked for. */

import { SEAL_DIGEST, SEAL_PARTS } from "../text/sealed.js";
import { word } from "../text/words.js";
import { make, need } from "./element.js";

/** @import { Session } from "../session/session.js" */

/** The file's sum stands in it; it is of the file without it. */
const SUM = /( data-sum=")([0-9a-f]{64})/;

/** @param {string} tag @param {string[]} lines */
function listOf(tag, lines) {
  const list = make("ul", "");
  for (const line of lines) {
    const item = make("li", "");
    item.append(make(tag, line));
    list.append(item);
  }
  return list;
}

/** @param {Session} session @param {string} file as the document was before the program began */
async function digestText(session, file) {
  const bare = await session.digest(file.replace(SUM, "$1"));
  if (bare === null) return word("sealed.unknown");
  return bare === SUM.exec(file)?.[2] ? String(await session.digest(file)) : word("sealed.changed");
}

/** @param {Session} session */
export function showSealed(session) {
  const { file = "" } = /** @type {{ file?: string }} */ (document.currentScript ?? {});
  const panel = need("sealed", HTMLDetailsElement);
  const digest = make("code", word("sealed.busy"), { id: "sealed-digest" });

  function furnishPanel() {
    for (const [heading, lines] of SEAL_PARTS) panel.append(make("h3", heading), listOf("span", lines));
    const told = make("p", "", { role: "status" });
    told.append(digest);
    panel.append(make("h3", SEAL_DIGEST.title), told, make("p", SEAL_DIGEST.caution), listOf("code", SEAL_DIGEST.tools));
  }

  let known = false;
  async function tell() {
    if (!panel.open || known) return;
    if (panel.childElementCount === 1) furnishPanel();
    if (session.read().program === null) return;
    known = true;
    digest.textContent = await digestText(session, file);
  }
  panel.addEventListener("toggle", () => tell().catch(session.fail));
  session.watch((state) => state.program, () => tell().catch(session.fail));
}
