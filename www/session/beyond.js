/** What was done with the dipoles of all decompositions: it belongs into the methods for as long as these dipoles stand. */

/** @typedef {ReturnType<typeof makeBeyond>} Beyond */

/** @param {{ read: () => SessionState }} store */
export function makeBeyond(store) {
  /** Answers that there are. */
  const standing = () => store.read().decompositions.flatMap(({ answer }) => (answer === null ? [] : [answer.key])).join();
  /** @type {{ of: string, count: number | null } | null} */
  let grouped = null;
  let matched = "";

  return {
    /** @template T @param {Promise<T | null>} asked @param {number | null} count groups that were asked for by hand @returns {Promise<T | null>} */
    async grouping(asked, count) {
      const of = standing();
      const found = await asked;
      if (found !== null) grouped = { of, count };
      return found;
    },

    /** @template T @param {Promise<T | null>} asked @returns {Promise<T | null>} */
    async matching(asked) {
      const of = standing();
      const found = await asked;
      if (found !== null) matched = of;
      return found;
    },

    told() {
      const now = standing();
      const groups = grouped?.of === now ? grouped : null;
      return { groups: groups !== null, group_count: groups?.count ?? null, matches: matched === now };
    },
  };
}
