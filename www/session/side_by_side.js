/** What is done with decompositions as wholes. */

import { emptyDecomposition, nextId, uniqueName } from "./decompositions.js";

/** @import { Pool } from "../engine/pool/pool.js" */
/** @import { Fitting } from "./fitting.js" */

/**
 * @param {{ read: () => SessionState, write: (patch: Partial<SessionState>) => void }} store
 * @param {() => Pool | null} pool
 * @param {{ fitting: Fitting, step: (patch: Partial<SessionState>, what: string[]) => void,
 *           askChanged: () => Promise<void>, choose: (index: number) => Promise<void> }} session
 */
export function makeSideBySide(store, pool, { fitting, step, askChanged, choose }) {
  /** The one that was asked for last. */
  let wanted = 0;

  /** What the state has of a decomposition that becomes the current one. @param {Decomposition} one @returns {Partial<SessionState>} */
  function asCurrent({ id, inputs, settings, example, answer, failure }) {
    const phase = failure !== null ? "failed" : answer !== null ? "answered" : inputs.maps === null ? "ready" : "busy";
    return { current: id, inputs, settings, example, answer, failure, phase, changed: [], said: null, refused: null, pointed: null };
  }

  /** @param {number} id @param {string} what @param {(one: Decomposition, others: Decomposition[]) => Partial<Decomposition>} change */
  function alter(id, what, change) {
    const { decompositions } = store.read();
    const others = decompositions.filter((one) => one.id !== id);
    step({ decompositions: decompositions.map((one) => (one.id === id ? { ...one, ...change(one, others) } : one)) }, [what]);
  }

  return {
    /** Makes a decomposition the current one. Nothing is computed but the sheet of the map in view. @param {number} id */
    async openDecomposition(id) {
      const engine = pool();
      wanted = id;
      const find = () => store.read().decompositions.find((one) => one.id === id);
      const one = find();
      if (engine === null || one === undefined || id === store.read().current) return;
      const map = one.answer?.maps[one.answer.chosen];
      /** @type {Sheet | null} */
      let sheet = null;
      if (one.answer !== null && map !== undefined && "rv" in map) {
        // A fault is told when the map is asked for again below.
        sheet = await engine.ask({ kind: "sheet", key: one.answer.key, index: one.answer.chosen }).catch(() => null);
      }
      const now = find();
      if (wanted !== id || now === undefined) return;
      const { answer: before } = store.read();
      const same = now.answer !== null && now.answer.key === one.answer?.key;
      store.write(asCurrent({ ...now, answer: now.answer === null ? null : { ...now.answer, sheet: same ? sheet : null } }));
      // What was given up before its first answer is fitted when it is asked for again.
      if (store.read().phase === "busy" && !fitting.isPending()) store.write({ phase: fitting.restingPhase() });
      if (before !== null) engine.rest(before.key);
      engine.reorder();
      const { answer } = store.read();
      if (answer !== null && answer.sheet === null) await choose(answer.chosen);
    },

    /** @param {number} id @param {string} name */
    renameDecomposition(id, name) {
      alter(id, "name", ({ subject }, others) => ({ name: uniqueName(name.trim(), subject, others), typed: true }));
    },

    /** @param {number} id @param {string} subject */
    setSubject(id, subject) {
      const whose = subject.trim();
      // A number that told it from another of its former subject is not needed any more.
      const plain = (/** @type {string} */ name) => name.replace(/ \(\d+\)$/, "");
      alter(id, "subject", ({ name }, others) => ({ subject: whose, name: uniqueName(plain(name), whose, others) }));
    },

    /** A mutual-information reduction that the user has. @param {number} id @param {number | null} information */
    setInformation(id, information) {
      alter(id, "information", () => ({ information }));
    },

    /** Takes a decomposition away; the next one becomes current where it was. @param {number} id */
    removeDecomposition(id) {
      const { decompositions, current } = store.read();
      const at = decompositions.findIndex((one) => one.id === id);
      if (at < 0) return;
      const rest = decompositions.filter((one) => one.id !== id);
      if (rest.length === 0) rest.push(emptyDecomposition(nextId(decompositions)));
      const next = id === current ? asCurrent(rest[Math.min(at, rest.length - 1)]) : {};
      step({ ...next, decompositions: rest }, ["decomposition"]);
      askChanged();
    },

    /** What has given way to another table stays beside it. */
    keepBoth() {
      const { said, decompositions, current } = store.read();
      if (said?.former === undefined) return;
      const former = fitting.revived({ ...said.former, id: nextId(decompositions) });
      const at = decompositions.findIndex(({ id }) => id === current);
      const others = decompositions.map((one) => ({ ...one, name: uniqueName(one.name, one.subject, [former]) }));
      step({ decompositions: [...others.slice(0, at), former, ...others.slice(at)] }, ["decomposition"]);
      askChanged();
    },
  };
}
