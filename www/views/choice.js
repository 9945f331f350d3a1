/** Which map of the table is shown: a list with each map's residual variance, and a step to either side. */

import { percentText } from "../text/figures.js";
import { word } from "../text/words.js";
import { make, need } from "./element.js";

/** @param {MapSummary} map */
function optionText(map) {
  return `${map.name} · ${"rv" in map ? `RV ${percentText(map.rv)}` : word("choice.unfitted")}`;
}

/** @param {import("../session/session.js").Session} session */
export function showChoice(session) {
  const list = need("map-choice", HTMLSelectElement);
  const previous = need("map-previous", HTMLButtonElement);
  const next = need("map-next", HTMLButtonElement);
  /** The answer whose maps are listed. @type {number | null} */
  let listed = null;

  list.addEventListener("change", () => session.choose(list.selectedIndex));
  previous.addEventListener("click", () => session.choose(list.selectedIndex - 1));
  next.addEventListener("click", () => session.choose(list.selectedIndex + 1));

  session.watch(
    (state) => state.answer,
    (answer) => {
      need("choice", HTMLElement).hidden = answer === null || answer.count < 2;
      if (answer === null) return;
      if (answer.key !== listed || list.length > answer.maps.length) list.length = 0;
      listed = answer.key;
      const added = document.createDocumentFragment();
      for (const map of answer.maps.slice(list.length)) added.append(make("option", optionText(map)));
      list.append(added);
      list.selectedIndex = answer.chosen;
      previous.disabled = answer.chosen === 0;
      next.disabled = answer.chosen >= answer.maps.length - 1;
    },
  );
}
