/** When workers are taken for lost, and how often what was lost with them is tried again. */

/** @import { WorkerClient } from "./client.js" */

/** So often a piece of work is given again that was lost with a worker. */
export const MOST_TRIES = 3;

/** After this long without a word a worker that is at work is taken for lost. */
export const SILENCE_MS = 20_000;

/** Faults of a worker, not of what it was given. */
export const LOST = ["engine-trap", "worker-lost", "worker-unavailable"];

/**
 * Takes a worker for lost that is at a piece of work and says nothing. While it has something else to do, or has just had,
 * it is not asked too much of: one long call keeps it from all the rest.
 * @param {WorkerClient} client
 */
export function makeSilence(client) {
  let timer = 0;
  let since = 0;
  /** @param {number} milliseconds */
  const wait = (milliseconds) => {
    clearTimeout(timer);
    timer = /** @type {any} */ (setTimeout)(look, milliseconds);
  };
  function look() {
    if (client.waitsFor() > 1) return wait(SILENCE_MS);
    const left = Math.max(since, client.heardAt()) + SILENCE_MS - performance.now();
    if (left > 0) wait(left);
    else client.abandon("a worker has said nothing any more");
  }
  return {
    /** It is at work from now on, or has said something. */
    listen() {
      since = performance.now();
      wait(SILENCE_MS);
    },

    end: () => clearTimeout(timer),
  };
}
