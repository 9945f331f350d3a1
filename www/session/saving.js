/** Work that is saved and comes back. What is saved is what can be lost: inputs, settings and names. */

import { isEmpty } from "./inputs.js";
import { readWork, workParts } from "./work.js";

/** @import { Digest, Work } from "./work.js" */

/** @param {SessionState} state */
function losable({ decompositions }) {
  return decompositions.flatMap(({ inputs, settings, name, subject, information, example }) =>
    isEmpty(inputs) || (example !== null && !example.edited) ? [] : [inputs, settings, name, subject, information],
  );
}

/**
 * @param {{ read: () => SessionState, write: (patch: Partial<SessionState>) => void }} store
 * @param {Digest} digest
 * @param {{ step: (patch: Partial<SessionState>, what: string[]) => void, ask: () => Promise<void>,
 *           explained: () => number[], explainAgain: (indexes: number[]) => void }} session
 */
export function makeSaving(store, digest, { step, ask, explained, explainAgain }) {
  /** As it was saved or restored last. @type {unknown[]} */
  let saved = [];
  /** As it was when it was last written down. @type {unknown[]} */
  let written = [];

  return {
    hasOwnWork: () => losable(store.read()).length > 0,

    /** Whether closing the page would lose something. */
    isUnsaved() {
      const now = losable(store.read());
      return now.length > 0 && (now.length !== saved.length || now.some((part, at) => part !== saved[at]));
    },

    /** All that was put in and chosen. @returns {Promise<Blob>} */
    async work() {
      const state = store.read();
      const now = losable(state);
      const parts = await workParts(state, explained(), digest);
      written = now;
      return new Blob(parts, { type: "application/json" });
    },

    /** The work has reached the disk, as far as a page can know. */
    noteSaved() {
      saved = written;
      store.write({});
    },

    /** Takes up saved work in the place of all that is there, which can be undone. @param {InwardContent} content */
    async restore(content) {
      const { decompositions, current, threshold, explained: maps } = await readWork(content, digest);
      const one = /** @type {Decomposition} */ (decompositions.find(({ id }) => id === current));
      const { inputs, settings, example } = one;
      // Whether names go along with what leaves is for whoever sits here to say, not for the file.
      step({ decompositions, current, inputs, settings, example, answer: null, failure: null, setAside: null, threshold }, ["work"]);
      saved = losable(store.read());
      await ask();
      explainAgain(maps);
    },
  };
}
