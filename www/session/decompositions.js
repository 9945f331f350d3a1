/** Several tables of maps side by side: what they are called, and what each has of the files and settings. */

import { FIRST_SETTINGS } from "./settings.js";
import { NO_INPUTS } from "./inputs.js";

/** What of the current decomposition stands in the state itself. @type {("inputs" | "settings" | "example" | "answer" | "failure")[]} */
const MIRRORED = ["inputs", "settings", "example", "answer", "failure"];

/** @param {number} id @returns {Decomposition} */
export function emptyDecomposition(id) {
  return {
    id,
    name: "",
    subject: "",
    information: null,
    inputs: NO_INPUTS,
    settings: FIRST_SETTINGS,
    example: null,
    answer: null,
    failure: null,
  };
}

/** The subject and the session that a name says by its entities (BIDS). @param {string} name */
export function entitiesOf(name) {
  /** @param {string} key */
  const entity = (key) => new RegExp(`(?:^|[_/])${key}-([A-Za-z0-9]+)`).exec(name)?.[1] ?? "";
  return { subject: entity("sub"), session: entity("ses") };
}

/** A file's name without its ending and its subject. @param {string} name */
export function stemOf(name) {
  const stem = name.replace(/\.[A-Za-z0-9]{1,5}$/, "");
  return stem.replace(/(^|[_/])sub-[A-Za-z0-9]+_?/, "$1") || stem;
}

/**
 * The current decomposition keeps up with the state. One that has another file is named after it.
 * @param {SessionState} state
 * @returns {Decomposition[]}
 */
export function mirrored(state) {
  const { decompositions, current } = state;
  return decompositions.map((one) => {
    if (one.id !== current || MIRRORED.every((key) => one[key] === state[key])) return one;
    const { inputs, settings, example, answer, failure } = state;
    const kept = { ...one, inputs, settings, example, answer, failure };
    const file = inputs.maps?.name ?? "";
    if (file === (one.inputs.maps?.name ?? "") && inputs.maps !== null) return kept;
    return { ...kept, name: stemOf(file), subject: entitiesOf(file).subject, information: null };
  });
}
