/** Questions about a response over time, and about dipoles of several people. */

import { freshMaps } from "./decompositions.js";

/** @import { Pool } from "../engine/pool/pool.js" */
/** @import { Beyond } from "./beyond.js" */

/**
 * @param {{ read: () => SessionState }} store
 * @param {() => Pool | null} pool
 * @param {Beyond} beyond
 */
export function makeCourses(store, pool, beyond) {
  return {
    /** The present answer's time points with the fits that there are. @returns {Promise<TimeCourse | null>} */
    async response() {
      const { answer } = store.read();
      const engine = pool();
      if (answer === null || engine === null) return null;
      const { radius_mm: radius } = answer.preamble.head;
      const fits = new Float64Array(5 * answer.count).fill(Number.NaN);
      freshMaps(answer).forEach((map, at) => {
        if ("rv" in map) fits.set([...map.canonical_mm.map((part) => part / radius), map.strength, map.rv], 5 * at);
      });
      return engine.ask({ kind: "response", key: answer.key, fits });
    },

    /** One position for time points of the present answer, both included. @param {number} first @param {number} last @returns {Promise<FixedDipole | null>} */
    async fixed(first, last) {
      const { answer } = store.read();
      return answer === null ? null : (pool()?.askAside({ kind: "fixed", key: answer.key, first, last }) ?? null);
    },

    /** @param {GroupsRequest} request @returns {Promise<Groups | null>} */
    async groups(request) {
      const engine = pool();
      return engine && beyond.grouping(engine.askAside({ kind: "groups", request }), request.groups ?? null);
    },

    /** @param {[Float32Array, number][]} rasters with the angles at their rims @param {number} size @returns {Promise<Float32Array | null>} */
    async meanRaster(rasters, size) {
      return pool()?.askAside({ kind: "mean-raster", rasters, size }) ?? null;
    },

    /** Gives up what was asked of one kind. @param {"fixed" | "groups"} kind */
    giveUp(kind) {
      pool()?.giveUp(kind);
    },
  };
}
