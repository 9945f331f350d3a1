/**
 * What is told of the chosen map beyond its trust: other explanations when they are asked for; what carries the fit, what
 * would move it and residual variance over the brain while their panels are open; the dipole by hand. Of the whole table,
 * electrodes to check, when nothing else is to be done.
 */

import { MOST_REGIONS } from "../engine/kinds.js";

/** @import { Pool } from "../engine/pool/pool.js" */
/** @import { Fitting } from "./fitting.js" */

/** @type {Explained} */
export const UNEXPLAINED = {
  key: -1, chosen: -1, alternatives: null, searching: false, influence: null, whatIf: null, landscape: null, hand: null, felt: null,
};

/** Panels whose content is made when they are opened. @typedef {"slices" | "influence" | "what-if"} ToldPanel */

/** Nothing is asked unbidden before so long nothing has changed. */
const IDLE_MS = 500;

/** What is explained of the map in view; nothing of another one. @param {SessionState} state */
export function explainedOf({ answer, explained }) {
  return answer !== null && explained.key === answer.key && explained.chosen === answer.chosen ? explained : UNEXPLAINED;
}

/** The verdict of the map in view: with other explanations, once these are known. @param {SessionState} state */
export function verdictOf(state) {
  return explainedOf(state).alternatives?.verdict ?? state.answer?.trust?.verdict ?? null;
}

/** By a helper, so that what is asked by hand need not wait. @param {Pool} engine @param {WorkerTask} task */
export function askHelper(engine, task) {
  return engine.askAside(task).catch((fault) => {
    // A helper that is lost says nothing about the maps.
    if (!fault.code.startsWith("worker-")) throw fault;
    return engine.ask(task);
  });
}

/**
 * @param {{ read: () => SessionState, write: (patch: Partial<SessionState>) => void,
 *           watch: <P>(pick: (state: SessionState) => P, render: (part: P) => void) => void }} store
 * @param {() => Pool | null} pool
 * @param {(fault: unknown) => void} fail
 * @param {Fitting} fitting
 * @param {() => GivenPopulations | null} given reference populations of the present answer
 */
export function makeExplanations(store, pool, fail, fitting, given) {
  /** @typedef {{ key: number, chosen: number }} Place */
  /** @typedef {{ wish: number[] | null }} Wanted */
  /** Other explanations of maps of one answer, with the populations that their verdicts rest on. */
  let found = { key: -1, of: /** @type {Map<number, { alternatives: Alternatives, by: string }>} */ (new Map()) };
  /** Maps of that answer for which it was known before the work was saved. @type {number[]} */
  let again = [];
  let goingOn = false;
  /** The last search that is waited for. */
  let search = 0;
  let timer = 0;
  let idling = false;
  /** @type {Set<ToldPanel>} */
  const open = new Set();
  let looking = false;
  /** Where the slices and the dipole are wanted: null at the best fit. @type {number[] | null} */
  let wanted = null;
  /** What was answered last. @type {{ hand: number[] | null, slices: number[] | null | undefined }} */
  let shown = { hand: null, slices: undefined };
  let following = false;
  /** @type {number[] | null} */
  let pointed = null;
  let feeling = false;

  /** @param {Place} of */
  const isStill = ({ key, chosen }) => store.read().answer?.key === key && store.read().answer?.chosen === chosen;

  /** Tells of a map, if it is still in view. @param {Place} of @param {Partial<Explained>} patch */
  function tell(of, patch) {
    if (isStill(of)) store.write({ explained: { ...explainedOf(store.read()), key: of.key, chosen: of.chosen, ...patch } });
  }

  /** @param {Place} of @param {any} fault */
  function refused(of, fault) {
    if (fault.code === "given-up") {
      lookLater();
      setTimeout(look, IDLE_MS);
    } else if (isStill(of)) fail(fault);
  }

  /** Verdicts that rest on other explanations stand in the list too. */
  function judge() {
    const { answer } = store.read();
    if (!answer?.verdicts || found.key !== answer.key) return;
    const verdicts = [...answer.verdicts];
    for (const [index, { alternatives }] of found.of) verdicts[index] = alternatives.verdict?.word ?? verdicts[index];
    if (verdicts.some((one, at) => one !== answer.verdicts?.[at])) store.write({ answer: { ...answer, verdicts } });
  }

  /** @param {boolean} aloud whether somebody waits for it */
  async function lookForOthers(aloud) {
    const engine = pool();
    const { answer } = store.read();
    if (engine === null || !answer?.sheet) return;
    const { key, chosen } = answer;
    const populations = given();
    const own = ++search;
    if (aloud) tell(answer, { searching: true });
    try {
      /** @type {Alternatives | null} */
      const alternatives = await askHelper(engine, { kind: "alternatives", key, index: chosen, populations });
      if (alternatives === null || own !== search || found.key !== key) return;
      found.of.set(chosen, { alternatives, by: populations?.name ?? "" });
      tell(answer, { alternatives });
      judge();
    } catch (fault) {
      if (own === search) refused(answer, fault);
    } finally {
      if (own === search) tell(answer, { searching: false });
    }
  }

  /** Of saved work, one map after the other, once nothing draws that verdicts rest on. */
  async function lookAgain() {
    const engine = pool();
    const { answer, populations: drawn } = store.read();
    const populations = given();
    if (goingOn || engine === null || answer === null || populations === null || drawn?.state === "drawing") return;
    goingOn = true;
    try {
      while (again.length > 0 && store.read().answer?.key === answer.key) {
        const [index] = again;
        /** @type {Alternatives | null} */
        const alternatives = await askHelper(engine, { kind: "alternatives", key: answer.key, index, populations });
        if (found.key !== answer.key) return;
        again = again.filter((one) => one !== index);
        if (alternatives === null) continue;
        found.of.set(index, { alternatives, by: populations.name });
        if (store.read().answer?.chosen === index) tell({ key: answer.key, chosen: index }, { alternatives });
        judge();
      }
    } catch (fault) {
      refused(answer, fault);
    } finally {
      goingOn = false;
    }
  }

  /** What opened panels are to show of the map in view. */
  async function look() {
    const engine = pool();
    const { answer } = store.read();
    const { influence, whatIf } = explainedOf(store.read());
    const kind = open.has("influence") && influence === null ? "influence" : open.has("what-if") && whatIf === null ? "what-if" : null;
    if (looking || engine === null || !answer?.sheet || kind === null) return;
    looking = true;
    try {
      const found = await askHelper(engine, { kind, key: answer.key, index: answer.chosen });
      tell(answer, kind === "influence" ? { influence: found } : { whatIf: found });
    } catch (fault) {
      refused(answer, fault);
      return;
    } finally {
      looking = false;
    }
    look();
  }

  /** What nobody has to ask for. */
  async function lookAtAll() {
    const engine = pool();
    const { answer, phase, arriving } = store.read();
    if (idling || engine === null || !answer?.trust || phase === "busy" || arriving) return;
    if (!fitting.isAtRest()) return lookLater();
    const { key, count, fitted } = answer;
    if (store.read().suspects?.key === key || count > MOST_REGIONS || fitted < count) return;
    idling = true;
    try {
      /** @type {Suspects | null} */
      const suspects = await askHelper(engine, { kind: "suspects", key });
      if (store.read().answer?.key === key) store.write({ suspects: { key, ...(suspects ?? { sentence: "", electrodes: [], found: [] }) } });
    } catch (fault) {
      refused(answer, fault);
    } finally {
      idling = false;
      if (store.read().answer?.key !== key) lookLater();
    }
  }

  function lookLater() {
    clearTimeout(timer);
    timer = /** @type {any} */ (setTimeout)(lookAtAll, IDLE_MS);
  }

  /** Asks for what is to be shown next, the dipole before the slices. @param {Pool} engine @param {Answer} answer */
  async function step(engine, answer) {
    const { key, chosen: index } = answer;
    const at = wanted;
    if (at !== null && at !== shown.hand) {
      /** @type {Probe | null} */
      const probe = await engine.ask({ kind: "probe", key, index, at, picture: true });
      shown.hand = at;
      if (probe === null || wanted === null || !isStill(answer)) return;
      // The next step by a key goes on from where it ended.
      if (wanted === at) wanted = shown.hand = probe.at;
      tell(answer, { hand: { ...probe, kept: explainedOf(store.read()).hand?.kept ?? false }, felt: null });
    } else {
      shown.slices = at;
      tell(answer, { landscape: await engine.ask({ kind: "landscape", key, index, at }) });
    }
  }

  /** The latest wish is followed, and one question at most is on its way. */
  async function follow() {
    if (following) return;
    following = true;
    try {
      for (;;) {
        const engine = pool();
        const { answer } = store.read();
        const over = (wanted === null || wanted === shown.hand) && (!open.has("slices") || wanted === shown.slices);
        if (engine === null || !answer?.sheet || over) return;
        await step(engine, answer).catch((fault) => {
          shown = { hand: wanted, slices: wanted };
          refused(answer, fault);
        });
      }
    } finally {
      following = false;
    }
  }

  function goBack() {
    const { answer } = store.read();
    wanted = shown.hand = null;
    if (answer !== null) tell(answer, { hand: null, felt: null });
    follow();
  }

  store.watch(
    ({ answer }) => (answer === null ? "" : `${answer.key} ${answer.chosen}`),
    () => {
      const { answer } = store.read();
      wanted = pointed = null;
      shown = { hand: null, slices: undefined };
      search++;
      if (answer === null) return;
      if (found.key !== answer.key) {
        found = { key: answer.key, of: new Map() };
        again = [];
      }
      tell(answer, { alternatives: found.of.get(answer.chosen)?.alternatives ?? null });
    },
  );
  store.watch(
    ({ answer }) => answer?.sheet,
    () => {
      follow();
      look();
    },
  );
  store.watch(
    ({ answer }) => answer?.trust,
    (trust) => {
      lookLater();
      const own = found.of.get(store.read().answer?.chosen ?? -1);
      // With more reference maps the verdict may be another one.
      if (trust?.verdict && own !== undefined && own.by !== given()?.name) lookForOthers(false);
    },
  );
  store.watch(({ answer }) => answer?.fitted, lookLater);
  store.watch(({ answer }) => answer?.verdicts, judge);
  store.watch(({ populations }) => populations?.state, lookAgain);

  return {
    /** Maps of the present answer whose other explanations are known, or will be. */
    explainedMaps: () => (found.key === store.read().answer?.key ? [...new Set([...found.of.keys(), ...again])].sort((a, b) => a - b) : []),

    /** Looks again for what was known of the present answer, once its reference populations are there. @param {number[]} indexes */
    explainAgain(indexes) {
      const { answer } = store.read();
      again = indexes.filter((index) => index < (answer?.count ?? 0));
      lookAgain();
    },

    /** Looks for other explanations of the map in view. */
    explain: () => lookForOthers(true),

    /** Gives the search up. */
    stopExplaining() {
      search++;
      pool()?.giveUp("alternatives");
      const { answer } = store.read();
      if (answer !== null) tell(answer, { searching: false });
    },

    /** Whether a panel is looked at. @param {ToldPanel} panel @param {boolean} now */
    lookAt(panel, now) {
      if (now) open.add(panel);
      else open.delete(panel);
      if (panel === "slices" && !now) goBack();
      follow();
      look();
    },

    /** Puts the dipole to a place, in the axes and the unit of a figure. @param {number[]} at */
    moveDipole(at) {
      wanted = at;
      follow();
    },

    /** Moves it on from where it was moved last. @param {number[]} by */
    moveDipoleBy(by) {
      const from = wanted ?? explainedOf(store.read()).landscape?.best;
      if (from !== undefined) this.moveDipole(from.map((part, axis) => part + by[axis]));
    },

    /** The dipole by hand stays while something else is looked at. */
    keepDipole() {
      const { answer } = store.read();
      const { hand } = explainedOf(store.read());
      if (answer !== null && hand !== null) tell(answer, { hand: { ...hand, kept: true } });
    },

    /** Back to the best fit. */
    returnDipole: goBack,

    /** Tells of a place without moving anything; null leaves it. @param {number[] | null} at */
    async feel(at) {
      pointed = at;
      const { answer } = store.read();
      if (answer === null) return;
      if (at === null && explainedOf(store.read()).felt !== null) tell(answer, { felt: null });
      if (feeling) return;
      feeling = true;
      try {
        for (let last = null; pointed !== null && pointed !== last; ) {
          last = pointed;
          /** @type {Probe | null} */
          const felt = await pool()?.ask({ kind: "probe", key: answer.key, index: answer.chosen, at: last, picture: false });
          if (pointed !== null) tell(answer, { felt });
        }
      } catch (fault) {
        refused(answer, fault);
      } finally {
        feeling = false;
      }
    },
  };
}
