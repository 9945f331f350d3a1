/** A button says for a moment what became of it. */

import { word } from "../text/words.js";

const MOMENT_MS = 2000;

/** @param {HTMLButtonElement} button @param {boolean} copied */
export function confirmOn(button, copied) {
  button.textContent = word(copied ? "copied" : "copy.failed");
  setTimeout(() => {
    button.textContent = word(button.dataset.text ?? "copy");
  }, MOMENT_MS);
}
