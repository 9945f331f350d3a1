/**
 * Unpacks the page's script and runs it: the first script of the page, and the only one that stands in it to be read.
 * The policy names the digest of the other too, so that nothing else than what was built would run.
 */

import { LOADING } from "./text/loading.js";
import { unpackedText } from "./text/packed.js";

/** The only policy of the page for the text of scripts; what may run is decided by the digest. */
function scriptText() {
  const types = /** @type {any} */ (globalThis).trustedTypes;
  const rules = {
    /** @param {string} text */
    createScript: (text) => text,
  };
  return types === undefined ? rules : types.createPolicy("page", rules);
}

function load() {
  // The file as it came, while nothing has changed it: the build sees to it that this is its text again.
  const file = `<!doctype html>\n${document.documentElement.outerHTML}`;
  const text = unpackedText(document.getElementById("script")?.textContent ?? "");
  const script = document.createElement("script");
  Object.assign(script, { file });
  script.text = scriptText().createScript(text);
  document.body.append(script);
  // It runs at once and takes this paragraph away, or is refused without a word.
  if (document.getElementById("unstarted") !== null) throw new Error(LOADING.refused);
}

try {
  load();
} catch (error) {
  document.documentElement.dataset.state = "failed";
  const place = document.getElementById("unstarted");
  if (place !== null) {
    place.textContent = `${LOADING.failed} ${error instanceof Error ? error.message : error}`;
    place.hidden = false;
  }
}
