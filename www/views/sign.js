/** The sign of the map, and whether it means anything. */

import { word } from "../text/words.js";
import { need } from "./element.js";

/** @import { Session } from "../session/session.js" */

/** @param {Session} session */
export function showSign(session) {
  const flip = need("flip", HTMLButtonElement);
  const polarity = need("polarity", HTMLFieldSetElement);
  const words = need("sign-words", HTMLElement);
  flip.addEventListener("click", () => session.turnSign());
  polarity.addEventListener("change", (event) => {
    if (event.target instanceof HTMLInputElement) session.set({ polarity: /** @type {Polarity} */ (event.target.value) });
  });

  session.watch(
    ({ settings }) => settings.polarity,
    (held) => {
      for (const choice of polarity.querySelectorAll("input")) choice.checked = choice.value === held;
    },
  );
  session.watch(
    ({ answer, settings }) => `${settings.flip.includes(answer?.chosen ?? -1)} ${settings.polarity}`,
    (_, { answer, settings }) => {
      const turned = settings.flip.includes(answer?.chosen ?? -1);
      flip.setAttribute("aria-pressed", String(turned));
      const parts = [word(`sign.${settings.polarity}`)];
      if (turned) parts.unshift(word("sign.turned"));
      words.textContent = parts.join(" ");
    },
  );
}
