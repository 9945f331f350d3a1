/**
 * Which map of the table is shown: a list with each map's residual variance, and a step to either side. A long table
 * is listed in blocks (browsers stall over lists of many thousand entries) and a map can be asked for by its number.
 */

import { percentText } from "../text/figures.js";
import { furtherText, mapText, word } from "../text/words.js";
import { make, need } from "./element.js";

/** @import { Session } from "../session/session.js" */

const BLOCK = 500;

/** @param {Answer} answer @param {number} index */
function optionText(answer, index) {
  const map = answer.maps[index];
  return `${mapText(answer, index)} · ${"rv" in map ? `RV ${percentText(map.rv)}` : word("choice.unfitted")}`;
}

/** @param {number} index @param {string} text */
function optionElement(index, text) {
  return make("option", text, { value: String(index) });
}

/** @param {Session} session */
export function showChoice(session) {
  const list = need("map-choice", HTMLSelectElement);
  const previous = need("map-previous", HTMLButtonElement);
  const next = need("map-next", HTMLButtonElement);
  const number = need("map-number", HTMLInputElement);
  /** What is listed: the answer's key, and the maps from one index up to another. */
  let listed = { key: 0, from: 0, to: 0, fitted: 0 };

  /** A step that leads nowhere hands the focus on. @param {HTMLButtonElement} step @param {boolean} over */
  function end(step, over) {
    if (over && document.activeElement === step) list.focus();
    step.disabled = over;
  }

  list.addEventListener("change", () => session.choose(Number(list.value)));
  previous.addEventListener("click", () => session.choose((session.read().answer?.chosen ?? 0) - 1));
  next.addEventListener("click", () => session.choose((session.read().answer?.chosen ?? 0) + 1));
  number.addEventListener("change", () => session.choose(number.valueAsNumber - 1));

  /** @param {Answer} answer */
  function listMaps(answer) {
    const { key, maps, count, chosen, fitted } = answer;
    const from = BLOCK * Math.floor(chosen / BLOCK);
    const end = Math.min(from + BLOCK, count);
    if (key !== listed.key || from !== listed.from || listed.to > maps.length) {
      list.replaceChildren();
      if (from > 0) list.append(optionElement(from - 1, furtherText(from, false)));
      if (end < count) list.append(optionElement(end, furtherText(count - end, true)));
      listed = { key, from, to: from, fitted: Math.max(from, fitted) };
    }
    // Those of earlier settings are rewritten as they are fitted again.
    for (; listed.fitted < Math.min(listed.to, fitted); listed.fitted++) {
      const option = list.querySelector(`option[value="${listed.fitted}"]`);
      if (option !== null) option.textContent = optionText(answer, listed.fitted);
    }
    const last = end < count ? list.lastElementChild : null;
    for (; listed.to < Math.min(end, maps.length); listed.to++) {
      list.insertBefore(optionElement(listed.to, optionText(answer, listed.to)), last);
    }
    list.value = String(chosen);
  }

  session.watch(
    (state) => state.answer,
    (answer) => {
      need("choice", HTMLElement).hidden = answer === null || answer.count < 2;
      if (answer === null) return;
      listMaps(answer);
      end(previous, answer.chosen === 0);
      end(next, answer.chosen >= answer.maps.length - 1);
      number.hidden = answer.count <= BLOCK;
      number.max = String(answer.maps.length);
      if (document.activeElement !== number) number.value = String(answer.chosen + 1);
    },
  );
}
