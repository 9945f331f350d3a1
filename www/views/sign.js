/** The sign of the map, and whether it means anything. */

import { word } from "../text/words.js";
import { need } from "./element.js";

/** @import { Session } from "../session/session.js" */

/** What the maps are. @param {Answer | null} answer */
function areOf(answer) {
  return answer?.preamble.understood.columns_are;
}

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
    ({ answer, settings }) => `${settings.flip.includes(answer?.chosen ?? -1)} ${settings.polarity} ${areOf(answer)}`,
    (_, { answer, settings }) => {
      const turned = settings.flip.includes(answer?.chosen ?? -1);
      flip.setAttribute("aria-pressed", String(turned));
      const arbitrary = settings.polarity === "arbitrary" && areOf(answer) === "time-points" ? "undeclared" : settings.polarity;
      const parts = [word(`sign.${arbitrary}`)];
      if (turned) parts.unshift(word("sign.turned"));
      words.textContent = parts.join(" ");
    },
  );
}
