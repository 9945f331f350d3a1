/**
 * A value that can be watched. Listeners run after the change, in the order they came; one that throws does not keep
 * the others from hearing of it.
 */

/**
 * @template {object} T
 * @param {T} initial
 */
export function makeStore(initial) {
  let state = initial;
  /** @type {Set<(state: T) => void>} */
  const listeners = new Set();

  return {
    read: () => state,

    /** @param {Partial<T>} patch */
    write(patch) {
      state = { ...state, ...patch };
      /** @type {unknown[]} */
      const errors = [];
      for (const listener of listeners) {
        try {
          listener(state);
        } catch (error) {
          errors.push(error);
        }
      }
      if (errors.length > 0) throw errors[0];
    },

    /**
     * Calls `render` now and whenever the picked part is another one.
     * @template P
     * @param {(state: T) => P} pick
     * @param {(part: P, state: T) => void} render
     */
    watch(pick, render) {
      let part = pick(state);
      render(part, state);
      listeners.add((next) => {
        const now = pick(next);
        if (Object.is(now, part)) return;
        part = now;
        render(now, next);
      });
    },
  };
}
