/**
 * Reference populations of the current decomposition, and what is told with them of how far a fit may be trusted.
 * They depend on electrodes and head alone, not on the maps: a few are kept by their key, and what was begun goes on.
 *
 * @typedef {{ key: string, size: number, counts: Record<PopulationKind, number>, numbers: Record<PopulationKind, Float64Array>,
 *             early: Map<string, Float64Array>, stopped: boolean }} Held `counts`: draws without a gap, `early`: those behind one
 */

import { POPULATION_KINDS } from "../engine/kinds.js";
import { askHelper } from "./explanations.js";

/** @import { Pool } from "../engine/pool/pool.js" */
/** @import { Fitting } from "./fitting.js" */

/** Populations that are kept: each is about 1 MB. */
const KEPT_POPULATIONS = 4;

/** Draws that came in are shown together this often. */
const DRAWN_MS = 300;

/** Drawing begins when nothing has changed for so long: who goes on working needs the workers. */
const QUIET_MS = 500;

/** A verdict is told of this part of the draws, and once more of all. */
const FIRST_PART = 0.1;

/** A longer table's verdicts are asked of a helper, which has fitted a part of it. */
const BRIEF_MAPS = 160;

/** @template V @param {(kind: PopulationKind) => V} make */
function byKind(make) {
  return /** @type {Record<PopulationKind, V>} */ (Object.fromEntries(POPULATION_KINDS.map((kind) => [kind, make(kind)])));
}

/**
 * @param {{ read: () => SessionState, write: (patch: Partial<SessionState>) => void,
 *           watch: <P>(pick: (state: SessionState) => P, render: (part: P) => void) => void }} store
 * @param {() => Pool | null} pool
 * @param {(fault: unknown) => void} fail
 * @param {Fitting} fitting
 */
export function makePopulations(store, pool, fail, fitting) {
  /** The last used one last. @type {Map<string, Held>} */
  const kept = new Map();
  /** Those of the answer, once their key is known. @type {Held | null} */
  let held = null;
  /** The answer whose populations these are, or are being asked for. */
  let study = -1;
  let drawing = false;
  let timer = 0;
  /** When something changed last. */
  let changed = 0;
  let waking = 0;
  /** What was asked last, so that it is asked once. */
  const asked = { trust: "", verdicts: -1 };
  let asking = false;
  /** What was asked of trust and has no answer. */
  let nothing = "";
  let looking = false;

  /** How much there is: 0 too little for a verdict, 1 some of it, 2 all. @param {Held | null} one */
  function level(one) {
    if (one === null) return 0;
    const least = Math.min(...Object.values(one.counts));
    return least === one.size ? 2 : least >= FIRST_PART * one.size ? 1 : 0;
  }

  /** @param {Held} one */
  const drawnKinds = ({ numbers, counts }) => byKind((kind) => numbers[kind].subarray(0, 2 * counts[kind]));

  /** How much of each kind is told of. @param {Held} one */
  const toldCount = (one) => (level(one) === 2 ? one.size : Math.ceil(FIRST_PART * one.size));

  /** Of a part, the same draws whoever made them: what is told does not depend on the workers. @param {Held} one @returns {GivenPopulations} */
  function given(one) {
    const count = toldCount(one);
    return { name: `${one.key} ${count}`, kinds: byKind((kind) => one.numbers[kind].slice(0, 2 * count)) };
  }

  function show() {
    clearTimeout(timer);
    timer = 0;
    if (held === null) return;
    const { key, counts, size, stopped } = held;
    const done = Object.values(counts).reduce((sum, count) => sum + count, 0);
    const total = size * POPULATION_KINDS.length;
    const state = done === total ? "done" : stopped ? "stopped" : drawing ? "drawing" : "waiting";
    store.write({ populations: { key, answer: study, kinds: drawnKinds(held), done, total, state } });
  }

  function showSoon() {
    if (timer === 0) timer = /** @type {any} */ (setTimeout)(show, DRAWN_MS);
  }

  /** @param {string} key @param {number} size @returns {Held} */
  function heldOf(key, size) {
    const one = kept.get(key) ?? {
      key, size, counts: byKind(() => 0), numbers: byKind(() => new Float64Array(2 * size)), early: new Map(), stopped: false,
    };
    kept.delete(key);
    kept.set(key, one);
    for (const old of [...kept.keys()].slice(0, -KEPT_POPULATIONS)) kept.delete(old);
    return one;
  }

  /** @param {Held} one @param {PopulationKind} kind @param {number} first @param {Float64Array} numbers */
  function take(one, kind, first, numbers) {
    const { counts, early } = one;
    early.set(`${kind} ${first}`, numbers);
    for (let part = early.get(`${kind} ${counts[kind]}`); part !== undefined; part = early.get(`${kind} ${counts[kind]}`)) {
      early.delete(`${kind} ${counts[kind]}`);
      one.numbers[kind].set(part, 2 * counts[kind]);
      counts[kind] += part.length / 2;
    }
    if (one === held) showSoon();
  }

  /** @param {Pool} engine @param {Held} one */
  async function draw(engine, one) {
    drawing = true;
    const from = study;
    // Pieces behind a gap were not asked for again if they were kept.
    one.early.clear();
    show();
    try {
      await engine.draw({ key: from, size: one.size, drawn: (kind, first, numbers) => take(one, kind, first, numbers) }, one.counts);
    } catch (fault) {
      if (/** @type {Fault} */ (fault).code !== "given-up" && store.read().answer?.key === from) {
        one.stopped = true;
        fail(fault);
      }
    }
    // Another call has taken its place, or this one is over.
    if (study !== from || held !== one) return;
    drawing = false;
    show();
  }

  /** @param {Pool} engine @param {Answer} answer */
  async function findKey(engine, answer) {
    study = answer.key;
    held = null;
    drawing = false;
    engine.stopDrawing();
    // Those of another head do not stand beside this answer.
    if (store.read().populations !== null) store.write({ populations: null });
    const { key, size } = await engine.ask({ kind: "population-key", key: answer.key });
    if (study !== answer.key) return;
    held = heldOf(key, size);
    if (store.read().stopped) held.stopped = true;
    show();
  }

  /** @param {Pool} engine @param {Answer} answer */
  async function askTrust(engine, { key, chosen, trust: before }) {
    const some = held !== null && level(held) > 0 ? held : null;
    const wish = `${key} ${chosen} ${some === null ? "" : `${some.key} ${toldCount(some)}`}`;
    if (asking || nothing === wish || (asked.trust === wish && before !== null)) return;
    asked.trust = wish;
    asking = true;
    try {
      const trust = await engine.ask({ kind: "trust", key, index: chosen, populations: some === null ? null : given(some) });
      const { answer } = store.read();
      if (trust === null) nothing = wish;
      if (answer?.key === key && answer.chosen === chosen) store.write({ answer: { ...answer, trust } });
    } catch (fault) {
      if (/** @type {Fault} */ (fault).code !== "given-up") nothing = wish;
      throw fault;
    } finally {
      asking = false;
      lookSoon();
    }
  }

  /** @param {Pool} engine @param {Answer} answer */
  async function askVerdicts(engine, { key, count }) {
    if (held === null || asked.verdicts === key) return;
    asked.verdicts = key;
    const task = /** @type {WorkerTask} */ ({ kind: "verdicts", key, populations: given(held) });
    try {
      const verdicts = await (count > BRIEF_MAPS ? askHelper(engine, task) : engine.ask(task));
      const { answer } = store.read();
      if (answer?.key === key) store.write({ answer: { ...answer, verdicts } });
    } finally {
      // Of a decomposition that was left meanwhile they are asked again.
      if (store.read().answer?.key !== key && asked.verdicts === key) asked.verdicts = -1;
    }
  }

  /** Does what is to be done next. */
  function look() {
    looking = false;
    const engine = pool();
    const { answer, phase, arriving } = store.read();
    // Files that came together are recognised first.
    if (engine === null || arriving) return;
    if (answer === null) {
      if (study !== -1) engine.stopDrawing();
      study = -1;
      held = null;
      drawing = false;
      if (store.read().populations !== null) store.write({ populations: null });
      return;
    }
    /** @param {any} fault */
    const refused = (fault) => {
      if (fault.code === "given-up" && asked.verdicts === answer.key) asked.verdicts = -1;
      if (store.read().answer?.key !== answer.key) return;
      // What was given up with the fits is asked again.
      if (fault.code === "given-up") {
        if (held === null) study = -1;
        lookSoon();
      } else {
        fail(fault);
      }
    };
    if (phase === "busy" && study !== answer.key) return;
    if (study !== answer.key) findKey(engine, answer).catch(refused);
    if (answer.sheet !== null) askTrust(engine, answer).catch(refused);
    if (held === null || !fitting.isAtRest()) return;
    const quiet = performance.now() - changed;
    if (level(held) < 2 && !held.stopped && !drawing) {
      if (quiet >= QUIET_MS) draw(engine, held);
      else wakeIn(QUIET_MS - quiet);
    }
    // Verdicts of maps whose fits were given up would fit them after all.
    const whole = answer.fitted === answer.count;
    if (level(held) === 2 && whole && answer.verdicts === null) askVerdicts(engine, answer).catch(refused);
  }

  /** After what is being done now has been asked: sheets come first. */
  function lookSoon() {
    if (looking) return;
    looking = true;
    setTimeout(look);
  }

  /** @param {number} milliseconds */
  function wakeIn(milliseconds) {
    clearTimeout(waking);
    waking = /** @type {any} */ (setTimeout)(lookSoon, milliseconds);
  }

  function noteChange() {
    changed = performance.now();
    lookSoon();
  }

  store.watch(({ answer }) => answer?.key, noteChange);
  store.watch(({ answer }) => answer?.chosen, noteChange);
  store.watch(({ answer }) => answer?.sheet, lookSoon);
  store.watch(({ answer }) => answer?.fitted, lookSoon);
  store.watch(({ progress }) => progress, noteChange);
  store.watch(({ settings }) => settings, noteChange);
  store.watch(({ phase }) => phase, lookSoon);
  store.watch(({ arriving }) => arriving, lookSoon);
  store.watch(({ populations }) => populations, lookSoon);

  return {
    /** What a verdict of the present answer rests on by now; null while that is too little. */
    givenPopulations: () => (held !== null && level(held) > 0 && study === store.read().answer?.key ? given(held) : null),

    /** Draws reference populations again after they were stopped. */
    drawPopulations() {
      if (held === null) return;
      held.stopped = false;
      changed = 0;
      show();
    },

    /** Draws no more of these populations; what there is stays. */
    stopPopulations() {
      if (held === null) return;
      held.stopped = true;
      pool()?.stopDrawing();
      drawing = false;
      show();
    },
  };
}
