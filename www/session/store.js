/**
 * A value that can be watched. Listeners run after the change, in the order they came; one that throws does not keep
 * the others from hearing of it.
 */

/** What is not told at once is told at the latest after so long: a person takes that for at once. */
const LATER_MS = 100;

/**
 * @template {object} T
 * @param {T} initial
 */
export function makeStore(initial) {
  let state = initial;
  /** Those that are told first come first. @type {Record<"first" | "rest", Set<(state: T) => void>>} */
  const listeners = { first: new Set(), rest: new Set() };
  let timer = 0;

  /** @param {("first" | "rest")[]} whom */
  function tell(...whom) {
    /** @type {unknown[]} */
    const errors = [];
    for (const listener of whom.flatMap((who) => [...listeners[who]])) {
      try {
        listener(state);
      } catch (error) {
        errors.push(error);
      }
    }
    if (errors.length > 0) throw errors[0];
  }

  function tellAll() {
    clearTimeout(timer);
    timer = 0;
    tell("first", "rest");
  }

  return {
    read: () => state,

    /** @param {Partial<T>} patch */
    write(patch) {
      state = { ...state, ...patch };
      tellAll();
    },

    /**
     * A change of which some are told at once and the others shortly after, or with the next change: for what a person
     * waits for, and for what will have changed again before it could be looked at.
     * @param {Partial<T>} patch
     * @param {boolean} [shown] whether the others hear of it as soon as the first have been shown
     */
    writeFirst(patch, shown = false) {
      state = { ...state, ...patch };
      // What is to be shown now is not held up by what was put off before.
      if (shown) clearTimeout(timer);
      if (shown || timer === 0) timer = /** @type {any} */ (setTimeout)(tellAll, LATER_MS);
      // A page in the background draws nothing: there the time decides.
      if (shown) requestAnimationFrame(() => setTimeout(() => timer !== 0 && tellAll()));
      tell("first");
    },

    /**
     * Calls `render` now and whenever the picked part is another one.
     * @template P
     * @param {(state: T) => P} pick
     * @param {(part: P, state: T) => void} render
     * @param {"first" | "rest"} [when]
     */
    watch(pick, render, when = "rest") {
      let part = pick(state);
      render(part, state);
      listeners[when].add((next) => {
        const now = pick(next);
        if (Object.is(now, part)) return;
        part = now;
        render(now, next);
      });
    },
  };
}
