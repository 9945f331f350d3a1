/**
 * Asks the engine about decompositions: the current one first, with the sheet of the map in view, all others behind it.
 * A run is all of that for one decomposition under one group of settings.
 *
 * @typedef {{ id: number, key: number, wish: string, inputs: Inputs, draft: Answer | null, pending: boolean, over: boolean,
 *             count: number | null, done: number, parts: Map<number, MapSummary[]>, sheet: Promise<void> | null, seen: number }} Run
 *   `parts`: maps that were fitted before all those in front of them; `seen`: the map that was in view when it was looked last, -1 of other tables
 */

import { pageFault } from "../text/faults.js";
import { namedFiles, toldRoles } from "./inputs.js";
import { sentSettings } from "./settings.js";

/** @typedef {ReturnType<typeof makeFitting>} Fitting */

/** @import { Pool } from "../engine/pool/pool.js" */

/** Maps that came in are shown together this often: a view that is drawn anew for each slice would be in the way. */
const SHOWING_MS = 60;

/** The time left is told from here on, when it says something. */
const TELLING_MS = 700;

/**
 * @param {{ read: () => SessionState, write: (patch: Partial<SessionState>) => void,
 *           writeFirst: (patch: Partial<SessionState>, shown?: boolean) => void }} store
 * @param {() => Pool | null} pool
 * @param {(fault: unknown) => void} fail
 */
export function makeFitting(store, pool, fail) {
  /** By decomposition, the latest of each. @type {Map<number, Run>} */
  const runs = new Map();
  /** What the progress is of: all that was begun since the workers last had nothing to do. @type {Set<Run>} */
  let batch = new Set();
  /** When the first maps of these were told, and how many. */
  let begun = { at: 0, done: 0 };
  /** Runs with maps that are not shown yet. @type {Set<Run>} */
  const unshown = new Set();
  let timer = 0;

  /** @param {number} id */
  const entry = (id) => store.read().decompositions.find((one) => one.id === id);

  /** @param {number} id */
  const isCurrent = (id) => store.read().current === id;

  /** Changes one decomposition, in the state itself too where it is the current one. @param {number} id @param {Partial<Decomposition>} patch */
  function writeEntry(id, patch) {
    const { decompositions } = store.read();
    if (isCurrent(id)) store.write(patch);
    else store.write({ decompositions: decompositions.map((one) => (one.id === id ? { ...one, ...patch } : one)) });
  }

  function restingPhase() {
    if (pool() === null) return "loading";
    return store.read().answer === null ? "ready" : "answered";
  }

  /** @param {Decomposition} one @returns {NamedRequest} */
  function requestOf({ inputs, settings }) {
    return {
      files: namedFiles(inputs).map(({ name, input }) => ({ name, content: input.content })),
      settings: sentSettings(settings, toldRoles(inputs)),
      lenient: store.read().decompositions.length > 1,
    };
  }

  /** What an answer depends on besides the tables. @param {Decomposition} one */
  const wishOf = ({ inputs, settings }) => JSON.stringify(sentSettings(settings, toldRoles(inputs)));

  /** @returns {Progress | null} */
  function progress() {
    const known = [...batch].filter(({ count }) => count !== null);
    const done = known.reduce((sum, run) => sum + run.done, 0);
    const opened = known.reduce((sum, { count }) => sum + (count ?? 0), 0);
    const total = known.length === 0 ? 0 : Math.round((opened / known.length) * batch.size);
    if (done === 0 || [...batch].every(({ over }) => over)) return null;
    // Reading tables says nothing about fitting: the time runs from the first maps on.
    if (begun.done === 0) begun = { at: performance.now(), done };
    const spent = performance.now() - begun.at;
    const left = spent < TELLING_MS || done === begun.done ? null : ((spent / (done - begun.done)) * (total - done)) / 1000;
    return { done, total, left, about: known.length < batch.size };
  }

  /** How long the last showing took. */
  let took = 0;

  /** Shows what has come in. */
  function showMaps() {
    const start = performance.now();
    clearTimeout(timer);
    timer = 0;
    const { decompositions, current, answer } = store.read();
    /** @param {number} id @param {Answer | null} shown */
    const now = (id, shown) => {
      const run = runs.get(id);
      if (run === undefined || shown === null || shown.key !== run.key || !unshown.has(run)) return shown;
      return { ...shown, fitted: run.draft?.fitted ?? 0 };
    };
    const others = decompositions.map((one) => {
      const shown = one.id === current ? one.answer : now(one.id, one.answer);
      return shown === one.answer ? one : { ...one, answer: shown };
    });
    const answerNow = now(current, answer);
    unshown.clear();
    store.write({ decompositions: others, answer: answerNow, progress: progress() });
    took = performance.now() - start;
  }

  /** @param {Run} run @param {boolean} [atOnce] */
  function showLater(run, atOnce = false) {
    unshown.add(run);
    if (atOnce) showMaps();
    else if (timer === 0) timer = /** @type {any} */ (setTimeout)(showMaps, Math.max(SHOWING_MS, 4 * took));
  }

  /** @param {Run} run */
  function begin(run) {
    if ([...batch].every(({ over }) => over)) {
      batch = new Set();
      begun = { at: 0, done: 0 };
    }
    batch.add(run);
  }

  /** A run that nobody waits for any more. @param {number} id @param {boolean} atOnce ends workers that may be long at opening it */
  function drop(id, atOnce) {
    const run = runs.get(id);
    if (run === undefined) return;
    runs.delete(id);
    batch.delete(run);
    run.over = true;
    if (!run.pending) return pool()?.drop(run.key);
    if (atOnce) pool()?.giveUp(run.key);
    pool()?.forget(run.key);
  }

  /** @param {Run} run becomes the answer, unless nobody waits for it any more @param {Sheet | null} sheet */
  function present(run, sheet) {
    if (!run.pending || runs.get(run.id) !== run || run.draft === null) return;
    run.pending = false;
    const before = entry(run.id)?.answer;
    if (before) pool()?.forget(before.key);
    const answer = { ...run.draft, sheet: isCurrent(run.id) ? sheet : null };
    if (isCurrent(run.id)) store.writeFirst({ phase: "answered", answer }, true);
    else writeEntry(run.id, { answer });
  }

  /** While an answer is made under other settings, another map may be opened in the one that stands. @param {Run} run */
  function lookAgain(run) {
    const { draft, seen } = run;
    const now = entry(run.id)?.answer?.chosen ?? seen;
    if (seen < 0 || now === seen || draft === null) return;
    run.seen = now;
    const map = draft.maps[now];
    if (map !== undefined && "rv" in map) draft.chosen = now;
  }

  /** Shows the map that is chosen, if it can be shown. @param {Run} run */
  async function presentSheet(run) {
    const engine = pool();
    const { draft } = run;
    if (engine === null || draft === null) return;
    while (run.pending && runs.get(run.id) === run) {
      const index = draft.chosen;
      const sheet = await engine.ask({ kind: "sheet", key: run.key, index });
      lookAgain(run);
      if (draft.chosen === index) return present(run, sheet);
    }
  }

  /** @param {Run} run @param {OpenedStudy} opened @param {Decomposition} one as it was when it was asked about */
  function take(run, { preamble, count }, { inputs, settings, example, begin, answer: before }) {
    if (inputs.maps === null) return;
    const beside = inputs.maps.role === "electrodes-and-maps" ? inputs.maps.name : null;
    const names = { electrodes: inputs.electrodes?.name ?? beside, maps: inputs.maps.name };
    run.count = count;
    run.draft = { key: run.key, names, inputs, example, settings, preamble, count, maps: [], fitted: 0, chosen: Math.min(begin, count - 1), sheet: null, trust: null, verdicts: null };
    if (before === null || before.count !== count || before.names.maps !== names.maps) return;
    // The same tables under other settings: the same map stays in view.
    run.draft.maps = [...before.maps];
    run.draft.chosen = before.chosen;
    run.seen = before.chosen;
    lookAgain(run);
  }

  /** Maps in whatever order they are fitted; they are told in theirs. @param {Run} run @param {number} first @param {MapSummary[]} maps */
  function takeMaps(run, first, maps) {
    const { draft, parts } = run;
    if (draft === null || runs.get(run.id) !== run) return;
    run.done += maps.length;
    parts.set(first, maps);
    for (let part = parts.get(draft.fitted); part !== undefined; part = parts.get(draft.fitted)) {
      parts.delete(draft.fitted);
      part.forEach((map, at) => {
        draft.maps[draft.fitted + at] = map;
      });
      draft.fitted += part.length;
    }
    showLater(run);
    if (!run.pending) return;
    const kept = draft.chosen < draft.fitted ? draft.maps[draft.chosen] : undefined;
    const found = draft.maps.slice(0, draft.fitted).findIndex((map) => "rv" in map);
    const chosen = kept !== undefined && "rv" in kept ? draft.chosen : found;
    if (run.sheet !== null || kept === undefined || chosen < 0) return;
    draft.chosen = chosen;
    if (!isCurrent(run.id)) return present(run, null);
    run.sheet = presentSheet(run);
    // Given up together with the fits, nobody asks for it below.
    run.sheet.catch(() => {});
  }

  /** Ranges of maps that are missing. @param {Run} run */
  function missing({ draft, parts, count }) {
    let first = draft?.fitted ?? 0;
    /** @type {{ first: number, last: number | null }[]} */
    const ranges = [];
    for (const [from, maps] of [...parts].sort(([a], [b]) => a - b)) {
      if (from > first) ranges.push({ first, last: from });
      first = from + maps.length;
    }
    if (count === null || first < count) ranges.push({ first, last: count });
    return ranges;
  }

  /** Fits what is missing of a run. @param {Run} run @param {Decomposition} one */
  async function fitMissing(run, one) {
    const engine = pool();
    if (engine === null || runs.get(run.id) !== run) return;
    const wanted = {
      key: run.key,
      count: run.count,
      rank: () => (isCurrent(run.id) ? 0 : 1),
      /** @param {OpenedStudy} opened */
      opened: (opened) => take(run, opened, one),
      /** @param {number} first @param {MapSummary[]} maps */
      fitted: (first, maps) => takeMaps(run, first, maps),
    };
    await engine.fit(wanted, missing(run));
    await run.sheet;
    if (runs.get(run.id) !== run) return;
    const first = run.draft?.maps[0];
    if (run.pending && first !== undefined && "error" in first) throw first.error;
  }

  /** Values of earlier settings do not stand beside new ones for good; the map in view keeps its name. @param {Answer} draft */
  function forgetEarlier({ maps, fitted, chosen }) {
    for (let at = fitted; at < maps.length; at++) if (at !== chosen) delete maps[at];
  }

  /** Ends a run. @param {Run} run */
  function finish(run) {
    run.over = true;
    if (runs.get(run.id) === run) showLater(run, [...batch].every(({ over }) => over) || isCurrent(run.id));
  }

  /**
   * Asks about a decomposition; an older question about it that nobody waits for any more is given up.
   * @param {number} id
   * @param {(code: string) => void} [refuse] takes inputs back that led to no answer
   */
  async function start(id, refuse) {
    const engine = pool();
    const one = entry(id);
    if (engine === null || one === undefined) return;
    const { inputs, answer: before } = one;
    // The worker has read these tables for the present answer: it needs no more than the other settings.
    const from = before?.inputs === inputs ? before.key : null;
    const former = runs.get(id);
    drop(id, from === null);
    if (inputs.maps === null) {
      if (before !== null) engine.forget(before.key);
      writeEntry(id, { answer: null, failure: null });
      if (isCurrent(id)) store.write({ phase: "ready", progress: progress(), stopped: false });
      return;
    }
    /** @type {Run} */
    const run = {
      id, inputs, key: engine.name(requestOf(one), from), wish: wishOf(one),
      draft: null, pending: true, over: false, count: null, done: 0, parts: new Map(), sheet: null, seen: -1,
    };
    runs.set(id, run);
    begin(run);
    if (isCurrent(id)) store.writeFirst({ phase: "busy", failure: null, progress: progress() });
    else if (one.failure !== null) writeEntry(id, { failure: null });
    try {
      if (isCurrent(id)) {
        take(run, await engine.ask({ kind: "open", key: run.key }), one);
        // The map in view is answered before the others; one that cannot be fitted under these settings is found out below.
        if (run.draft?.maps.length !== 0) await presentSheet(run).catch(() => null);
      }
      await fitMissing(run, one);
    } catch (fault) {
      lose(run, /** @type {Fault} */ (fault), former, refuse);
    } finally {
      finish(run);
    }
  }

  /**
   * @param {Run} run has failed
   * @param {Fault} fault
   * @param {Run} [former] goes on, if it is that of the answer which stays
   * @param {(code: string) => void} [refuse]
   */
  function lose(run, fault, former, refuse) {
    if (runs.get(run.id) !== run || fault.code === "given-up") return;
    run.over = true;
    if (run.pending) {
      batch.delete(run);
      pool()?.forget(run.key);
    }
    if (isCurrent(run.id)) {
      if (run.pending) refuse?.(fault.code);
      fail(fault);
    } else {
      writeEntry(run.id, { failure: pageFault(fault) });
    }
    const one = entry(run.id);
    if (!run.pending || former === undefined || one?.answer?.key !== former.key) return;
    runs.set(run.id, former);
    if (one.answer.fitted < one.answer.count) resume(former, one);
  }

  /** Whether something is left to be fitted that nobody is at. */
  function hasUnfinished() {
    return store.read().decompositions.some((one) => isUnfinished(one) && one.failure === null);
  }

  /** @param {Decomposition} one */
  function isUnfinished({ id, inputs, answer }) {
    const run = runs.get(id);
    if (inputs.maps === null || (run !== undefined && !run.over)) return false;
    return run === undefined || run.pending || answer === null || answer.fitted < answer.count;
  }

  /** Goes on where a run was stopped. @param {Run} run @param {Decomposition} one */
  async function resume(run, one) {
    run.over = false;
    begin(run);
    try {
      await fitMissing(run, one);
    } catch (fault) {
      lose(run, /** @type {Fault} */ (fault));
    } finally {
      finish(run);
    }
  }

  return {
    start,
    writeEntry,
    restingPhase,
    hasUnfinished,

    /** Whether the present tables and settings of a decomposition are those of its answer, there or being made. @param {number} id */
    isAsked(id) {
      const run = runs.get(id);
      const one = entry(id);
      return run !== undefined && one !== undefined && run.inputs === one.inputs && run.wish === wishOf(one);
    },

    /** Asks about all other decompositions that are not as they were when they were asked about. */
    startOthers() {
      const { decompositions } = store.read();
      for (const { id, inputs } of decompositions) {
        if (!isCurrent(id) && !this.isAsked(id) && (inputs.maps !== null || runs.has(id))) start(id);
      }
      for (const id of runs.keys()) if (!decompositions.some((one) => one.id === id)) this.leave(id);
    },

    /** A decomposition that is there no more. @param {number} id */
    leave(id) {
      const run = runs.get(id);
      drop(id, true);
      if (run !== undefined) pool()?.forget(run.key);
    },

    /** An answer that was put away is there again, without being computed. @param {Decomposition} one @returns {Decomposition} */
    revived(one) {
      const engine = pool();
      const { id, inputs, answer } = one;
      if (engine === null || answer === null || answer.fitted < answer.count || answer.inputs !== inputs) return { ...one, answer: null };
      const key = engine.name(requestOf(one), null);
      const draft = { ...answer, key, sheet: null, trust: null, verdicts: null };
      const { count } = answer;
      runs.set(id, { id, inputs, key, wish: wishOf({ ...one, settings: answer.settings }), draft, pending: false, over: true, count, done: count, parts: new Map(), sheet: null, seen: -1 });
      return { ...one, answer: draft };
    },

    /** Whether the current decomposition waits for its first answer. */
    isPending() {
      const run = runs.get(store.read().current);
      return run?.pending === true && !run.over;
    },

    /** Gives up all that the engine is at. */
    cancel() {
      const { answer } = store.read();
      pool()?.cancel();
      if (answer !== null) pool()?.giveUp(answer.key);
      for (const run of runs.values()) {
        if (run.over) continue;
        run.over = true;
        if (run.pending) drop(run.id, true);
        else if (run.draft !== null) forgetEarlier(run.draft);
        unshown.add(run);
      }
      batch = new Set();
      showMaps();
    },

    /** Fits what was left when it was given up. */
    fitRest() {
      for (const one of store.read().decompositions) {
        if (!isUnfinished(one)) continue;
        const run = runs.get(one.id);
        if (run?.draft && !run.pending) resume(run, one);
        else start(one.id);
      }
    },

    /** Whether nothing is being fitted. */
    isAtRest: () => [...runs.values()].every(({ over }) => over),

    /** Until nothing is fitted any more. */
    async rest() {
      while ([...runs.values()].some(({ over }) => !over)) await new Promise((wake) => setTimeout(wake, SHOWING_MS));
    },
  };
}
