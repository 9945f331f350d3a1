/** Questions about what has been fitted: single maps, reports, and several decompositions together. */

import { MOST_REGIONS } from "../engine/kinds.js";
import { freshMaps } from "./decompositions.js";
import { outwardNames } from "./outward.js";

/** @import { Pool } from "../engine/pool/pool.js" */
/** @import { Beyond } from "./beyond.js" */
/** @import { Fitting } from "./fitting.js" */

/**
 * @param {{ read: () => SessionState, write: (patch: Partial<SessionState>) => void }} store
 * @param {() => Pool | null} pool
 * @param {{ fail: (fault: unknown) => void, fitting: Fitting, beyond: Beyond, explained: () => number[] }} session
 *   `explained`: maps of the present answer whose other explanations are known
 */
export function makeInquiries(store, pool, { fail, fitting, beyond, explained }) {
  /** @param {number} id */
  const answerOf = (id) => store.read().decompositions.find((one) => one.id === id)?.answer ?? null;

  /** Asks for something that takes a while. @param {(engine: Pool, take: (step: FitProgress) => void) => Promise<Blob>} job @param {() => boolean} [isStill] whether a fault is of interest */
  async function inTime(job, isStill = () => true) {
    const engine = pool();
    if (engine === null) return null;
    try {
      return await job(engine, ({ done, total }) => {
        store.write({ progress: { done, total, left: null, about: false } });
      });
    } catch (fault) {
      if (isStill()) fail(fault);
      return null;
    } finally {
      store.write({ progress: null });
    }
  }

  /** Populations of the present answer; without all of them a report would be another one each time. */
  function wholePopulations() {
    const { answer, populations } = store.read();
    return populations?.state === "done" && populations.answer === answer?.key ? populations : null;
  }

  return {
    /** Shows another map of the table. @param {number} index */
    async choose(index) {
      const engine = pool();
      const { answer } = store.read();
      const map = answer?.maps[index];
      if (engine === null || answer === null || map === undefined) return;
      if ("error" in map) {
        store.write({ answer: { ...answer, chosen: index, sheet: null, trust: null } });
        return;
      }
      store.write({ answer: { ...answer, chosen: index, trust: null } });
      try {
        const sheet = await engine.ask({ kind: "sheet", key: answer.key, index });
        const now = store.read().answer;
        if (now?.key === answer.key && now.chosen === index) store.write({ answer: { ...now, sheet } });
      } catch (fault) {
        if (store.read().answer?.key === answer.key) fail(fault);
      }
    },

    /**
     * Small rasters of maps of a decomposition; null where there are none or the tables are others meanwhile.
     * @param {number} id
     * @param {number[]} indexes
     * @param {number} size
     * @returns {Promise<Thumbnails | null>}
     */
    async thumbnails(id, indexes, size) {
      const answer = answerOf(id);
      const engine = pool();
      if (answer === null || engine === null) return null;
      const { key } = answer;
      try {
        const small = await engine.ask({ kind: "thumbnails", key, indexes, size });
        return answerOf(id)?.key === key ? small : null;
      } catch (fault) {
        // Of an answer that gave way meanwhile nothing is said.
        if (answerOf(id)?.key === key) fail(fault);
        return null;
      }
    },

    /**
     * All decompositions that are answered as one report, with shares, groups and matches.
     * @param {ComparisonSettings} [settings]
     * @returns {Promise<Blob | null>}
     */
    async comparison(settings = {}) {
      await fitting.rest();
      const outward = outwardNames(store.read());
      const answered = store.read().decompositions.flatMap(({ id, information, answer }) => {
        const { name, subject } = outward.decompositions.get(id) ?? { name: "", subject: "" };
        return answer === null ? [] : [{ key: answer.key, names: outward.told.get(id) ?? {}, member: { name, subject: subject || null, information } }];
      });
      const keys = answered.map(({ key }) => key);
      const members = answered.map(({ member }) => member);
      const names = answered.map((one) => one.names);
      // Tables that are others meanwhile have been closed under it.
      const isStill = () => keys.every((key) => store.read().decompositions.some(({ answer }) => answer?.key === key));
      const report = await inTime(
        (engine, take) => engine.askAside({ kind: "comparison", keys, members, names, settings }, take),
        isStill,
      );
      for (const key of keys) pool()?.rest(key);
      return report;
    },

    /**
     * Near-dipolar shares of all decompositions that have fitted maps.
     * @param {number[]} at residual variances
     * @returns {Promise<Summary | null>}
     */
    async summary(at) {
      const members = store.read().decompositions.flatMap(({ name, subject, information, answer }) => {
        if (answer === null) return [];
        const maps = freshMaps(answer);
        const rv = maps.map((map) => ("rv" in map ? map.rv : null));
        const variance = maps.map((map) => ("rv" in map ? map.variance : null));
        const electrodes = answer.preamble.electrodes.filter(({ used }) => used).map(({ label }) => label);
        return [{ name, subject, information, rv, variance, electrodes }];
      });
      return pool()?.ask({ kind: "summary", request: { members, at } }) ?? null;
    },

    /**
     * Maps of two decompositions one to one; rejects with a fault where they cannot be paired.
     * @param {number} first
     * @param {number} second
     * @returns {Promise<Matches | null>}
     */
    async matches(first, second) {
      const [a, b] = [answerOf(first), answerOf(second)];
      const engine = pool();
      if (a === null || b === null || engine === null) return null;
      /** @param {Answer} answer */
      const positions = (answer) => {
        const all = new Float64Array(3 * answer.count).fill(Number.NaN);
        freshMaps(answer).forEach((map, at) => "rv" in map && all.set(map.canonical_mm, 3 * at));
        return all;
      };
      const names = [first, second].map((id) => store.read().decompositions.find((one) => one.id === id)?.name ?? "");
      return beyond.matching(engine.ask({ kind: "matches", keys: [a.key, b.key], own: positions(a), others: positions(b), names }));
    },

    /** What is said before the maps of a decomposition's report, under the names that may leave. @param {number} id @returns {Promise<InwardReport | null>} */
    async outwardPreamble(id) {
      const answer = answerOf(id);
      return answer === null ? null : (pool()?.ask({ kind: "preamble", key: answer.key, names: outwardNames(store.read()).told.get(id) ?? {} }) ?? null);
    },

    /** SHA-256 in hexadecimal. @param {InwardContent} content @returns {Promise<string | null>} */
    async digest(content) {
      return pool()?.askAside({ kind: "digest", content }) ?? null;
    },

    /** What a report made now would be without. */
    reportLacks() {
      const { answer } = store.read();
      return { regions: answer !== null && answer.count > MOST_REGIONS ? MOST_REGIONS : null, populations: answer !== null && wholePopulations() === null };
    },

    /** The whole report of the present answer. @returns {Promise<Blob | null>} */
    async report() {
      const { answer } = store.read();
      if (answer === null) return null;
      const drawn = wholePopulations();
      const populations = drawn !== null ? { name: `${drawn.key} ${drawn.kinds.noise.length / 2}`, kinds: drawn.kinds } : null;
      return inTime((engine, take) => engine.ask({ kind: "report", key: answer.key, names: outwardNames(store.read()).told.get(store.read().current), chosen: answer.chosen, explained: explained(), populations }, take));
    },
  };
}
