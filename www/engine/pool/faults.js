/** When workers are taken for lost, and how often what was lost with them is tried again. */

/** So often a piece of work is given again that was lost with a worker. */
export const MOST_TRIES = 3;

/** After this long without a word a worker that is at work is taken for lost. */
export const SILENCE_MS = 20_000;

/** Faults of a worker, not of what it was given. */
export const LOST = ["engine-trap", "worker-lost", "worker-unavailable"];
