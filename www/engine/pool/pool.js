/**
 * The workers of the page: one that is asked by hand, and helpers for ranges of maps and for other decompositions, which
 * are started when there is first something for them, and be it to warm up.
 */

import { isLarge, keysOf, makeBook, makeClient } from "./client.js";
import { makeSchedule } from "./schedule.js";

/** @typedef {ReturnType<typeof makePool>} Pool */

/** Studies that the first worker keeps open for questions. */
const KEPT = 6;

/** Helpers beside the first worker: each core but one, and no more than memory allows. */
function helperCount() {
  return Math.min(3, Math.max(1, (globalThis.navigator?.hardwareConcurrency ?? 2) - 1));
}

/** @param {NamedRequest} request */
function bytesOf({ files = [] }) {
  return files.reduce((sum, { content }) => sum + content.length, 0);
}

/**
 * @param {WebAssembly.Module} module
 * @param {() => Worker} startWorker
 * @param {number} [helpers]
 */
export function makePool(module, startWorker, helpers = helperCount()) {
  const book = makeBook();
  const clients = Array.from({ length: 1 + helpers }, () => makeClient(module, startWorker, book));
  const members = clients.map((client) => ({ client, busy: false, gone: false }));
  const schedule = makeSchedule(members);
  const [front, ...others] = clients;

  /** Studies that were asked about by hand, the last one last. @type {number[]} */
  let used = [];

  return {
    /** @param {WorkerTask} task @param {(step: any) => void} [progress] @returns {Promise<any>} */
    ask(task, progress) {
      const keys = keysOf(task);
      used = [...used.filter((key) => !keys.includes(key)), ...keys];
      const surplus = used.slice(0, -KEPT).filter((key) => !schedule.has(key));
      for (const key of surplus) front.release(key);
      used = used.filter((key) => !surplus.includes(key));
      // What was asked of a worker that is lost is asked once more.
      const answer = front.ask(task, progress).catch((fault) => {
        if (fault.code !== "worker-lost") throw fault;
        return front.ask(task, progress);
      });
      return answer.finally(schedule.dispatch);
    },

    name: front.name,

    /**
     * Asks a helper that has nothing to do, or else the last; the first worker where none can be started.
     * @param {WorkerTask} task
     * @param {(step: any) => void} [progress]
     * @returns {Promise<any>}
     */
    async askAside(task, progress) {
      const there = members.slice(1).filter(({ gone }) => !gone);
      const free = there.find(({ client }) => client.isIdle()) ?? there.at(-1);
      if (free === undefined) return this.ask(task, progress);
      try {
        return await free.client.ask(task, progress);
      } catch (fault) {
        if (/** @type {Fault} */ (fault).code !== "worker-unavailable") throw fault;
        free.gone = true;
        return await this.askAside(task, progress);
      } finally {
        schedule.dispatch();
      }
    },

    /** @param {number} key */
    forget(key) {
      schedule.drop(key);
      used = used.filter((one) => one !== key);
      for (const client of others) client.release(key);
      front.forget(key);
    },

    /** What is not in view any more is closed by helpers. @param {number} key */
    rest(key) {
      if (!schedule.has(key)) for (const client of others) client.release(key);
    },

    /** Gives up everything asked about one study, or of one kind; the rest is asked again. @param {number | WorkerTask["kind"]} what */
    giveUp(what) {
      if (typeof what === "number") schedule.drop(what);
      for (const client of clients) client.giveUp(what);
    },

    /**
     * Fits maps of a named table; see the schedule.
     * @param {Omit<Parameters<typeof schedule.fit>[0], "bytes">} wanted
     * @param {{ first: number, last: number | null }[]} ranges
     */
    fit(wanted, ranges) {
      const request = book.requests.get(wanted.key);
      return schedule.fit({ ...wanted, bytes: request === undefined ? 0 : bytesOf(request) }, ranges);
    },

    /**
     * Draws what is missing of reference populations, behind all fits; see `drawing.js`. A second call takes the place of the first.
     * @param {Omit<Parameters<typeof schedule.draw>[0], "bytes">} wanted
     * @param {Record<PopulationKind, number>} from how many there are of each kind
     */
    draw(wanted, from) {
      const request = book.requests.get(wanted.key);
      return schedule.draw({ ...wanted, bytes: request === undefined ? 0 : bytesOf(request) }, from);
    },

    stopDrawing: () => schedule.stopDrawing(),

    cancel: () => schedule.cancel(),

    /** Fits no more of a table, which stays open. @param {number} key */
    drop: (key) => schedule.drop(key),

    /** What is to be fitted first is another now. */
    reorder: () => schedule.dispatch(),

    /** Lets workers that have nothing to do fit an example for a moment: compiled code is quick after some use. @param {EngineRequest} request */
    warmUp(request) {
      if (isLarge(request)) return;
      for (const client of clients) if (client.isIdle()) client.ask({ kind: "warm", request }).catch(() => {}).finally(schedule.dispatch);
    },
  };
}
