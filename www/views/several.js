/** What all views of several decompositions ask of the state. */

import { freshMaps } from "../session/decompositions.js";
import { noun } from "../text/words.js";

/**
 * Does something once after many changes, and rests four times as long as it took.
 * @param {() => void} job
 */
export function inOne(job) {
  let [due, took] = [false, 0];
  return () => {
    if (due) return;
    due = true;
    setTimeout(() => {
      due = false;
      const start = performance.now();
      job();
      took = performance.now() - start;
    }, 4 * took);
  };
}

/** Those with fitted maps. @param {SessionState} state */
export function fittedDecompositions({ decompositions }) {
  return decompositions
    .map((decomposition, at) => ({ decomposition, at, maps: freshMaps(decomposition.answer) }))
    .filter(({ maps }) => maps.some((map) => "rv" in map));
}

/**
 * Which colour and dash a decomposition has, by its id: those of one name and several subjects have one.
 * @param {SessionState} state
 */
export function seriesOf(state) {
  /** @type {Map<string, number>} */
  const names = new Map();
  return new Map(
    fittedDecompositions(state).map(({ decomposition: { id, name, subject } }) => {
      const key = subject === "" ? String(id) : `of subjects: ${name}`;
      names.set(key, names.get(key) ?? names.size);
      return [id, names.get(key) ?? 0];
    }),
  );
}

/** What the maps are called: components, unless some are something else. @param {SessionState} state */
export function nounOf(state) {
  const all = fittedDecompositions(state).map(({ decomposition }) => decomposition.answer?.preamble.understood.columns_are);
  return noun(all.every((one) => one === "components"));
}
