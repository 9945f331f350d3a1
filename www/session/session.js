/**
 * The session: what was put in, what came out. Its functions are the only ones that change the state; views read
 * and watch it.
 */

import { makeStore } from "./store.js";
import { faultOf } from "../engine/fault.js";
import { pageFault } from "../text/faults.js";

/** @import { EngineClient } from "../engine/pool/client.js" */

/** @typedef {ReturnType<typeof makeSession>} Session */

/** @type {InputKind[]} */
const KINDS = ["electrodes", "maps"];

/** A map up to this number is kept in view when settings change. */
const KEEP_CHOSEN = 512;

export function makeSession() {
  const store = makeStore(
    /** @type {SessionState} */ ({
      phase: "loading",
      program: null,
      inputs: { electrodes: null, maps: null },
      settings: { mapUnit: "relative" },
      answer: null,
      failure: null,
      pointed: null,
      progress: null,
      stopped: false,
    }),
  );

  /** @type {EngineClient | null} */
  let client = null;
  /** @type {(client: EngineClient) => void} */
  let announce = () => {};
  /** @type {Promise<EngineClient>} */
  const started = new Promise((resolve) => {
    announce = resolve;
  });
  /** The study being opened, until it is answered or has failed. @type {number | null} */
  let pending = null;

  function restingPhase() {
    if (client === null) return "loading";
    return store.read().answer === null ? "ready" : "answered";
  }

  /** @param {unknown} error an error, or a fault as it came from the worker */
  function fail(error) {
    const fault = /** @type {Fault} */ (
      error !== null && typeof error === "object" && !(error instanceof Error) && "code" in error
        ? error
        : faultOf(error)
    );
    if (fault.code !== "given-up") store.write({ phase: "failed", failure: pageFault(fault) });
  }

  /** @param {boolean} [atOnce] ends the worker, which may be long at it, and with it what it has read */
  function dropPending(atOnce = true) {
    if (pending === null || client === null) return;
    if (atOnce) client.giveUp(pending);
    client.forget(pending);
    pending = null;
  }

  /** Asks the engine about the present inputs; an older question nobody waits for any more is given up. */
  async function ask() {
    if (client === null) return;
    const { inputs, settings, answer: before } = store.read();
    // The worker has read these tables for the present answer: it needs no more than the other settings.
    const from = before?.inputs === inputs ? before.key : null;
    dropPending(from === null);
    if (inputs.maps === null) {
      if (before !== null) client.forget(before.key);
      store.write({ phase: "ready", answer: null, failure: null, progress: null, stopped: false });
      return;
    }
    /** @type {EngineRequest} */
    const request = { maps: inputs.maps.content, settings };
    if (inputs.electrodes !== null) request.electrodes = inputs.electrodes.content;
    const key = client.name(request, from);
    pending = key;
    store.write({ phase: "busy", failure: null, progress: null, stopped: false });
    try {
      const { preamble, count } = await client.ask({ kind: "open", key });
      if (pending !== key) return;
      const names = { electrodes: inputs.electrodes?.name ?? null, maps: inputs.maps.name };
      // The same tables under other settings: the same map stays in view, unless it would have to be waited for.
      const same = before !== null && before.count === count && before.names.maps === names.maps;
      const chosen = same && before.chosen < KEEP_CHOSEN ? before.chosen : 0;
      await fitMaps({ key, names, inputs, settings, preamble, count, maps: [], chosen, sheet: null });
    } catch (fault) {
      if (pending === key) {
        pending = null;
        client.forget(key);
        fail(fault);
      } else if (store.read().answer?.key === key) {
        fail(fault);
      }
    }
  }

  /** @param {Answer} draft becomes the answer as soon as one of its maps is fitted */
  async function fitMaps(draft) {
    if (client === null) return;
    const { key, maps } = draft;
    /** @type {Promise<void> | null} */
    let shown = null;
    await client.ask({ kind: "fitAll", key }, (step) => {
      maps.length = step.done - step.maps.length;
      maps.push(...step.maps);
      const progress = step.done < step.total ? { done: step.done, total: step.total } : null;
      const answer = store.read().answer;
      if (answer?.key === key) store.write({ answer: { ...answer }, progress });
      else if (pending === key) store.write({ progress });
      const kept = maps[draft.chosen];
      const first = maps.findIndex((map) => "rv" in map);
      const fitted = kept !== undefined && "rv" in kept ? draft.chosen : first;
      if (shown === null && kept !== undefined && fitted >= 0) shown = show({ ...draft, chosen: fitted });
    });
    if (shown !== null) return shown;
    const first = maps[0];
    if (first !== undefined && "error" in first) throw first.error;
  }

  /** @param {Answer} draft */
  async function show(draft) {
    if (client === null || pending !== draft.key) return;
    const sheet = await client.ask({ kind: "sheet", key: draft.key, index: draft.chosen });
    if (pending !== draft.key) return;
    pending = null;
    const before = store.read().answer;
    if (before !== null) client.forget(before.key);
    store.write({ phase: "answered", answer: { ...draft, sheet } });
  }

  return {
    read: store.read,
    watch: store.watch,
    fail,

    /** The engine has answered its first call. @param {EngineClient} ready @param {Program} program */
    engineReady(ready, program) {
      client = ready;
      announce(ready);
      store.write({ phase: store.read().phase === "failed" ? "failed" : "ready", program });
      if (store.read().inputs.maps !== null) ask();
    },

    /**
     * What a table is, by its content; told as soon as the engine runs.
     * @param {InwardContent} content
     * @returns {Promise<InputKind>}
     */
    async kindOf(content) {
      const engine = await started;
      return engine.ask({ kind: "kindOf", content });
    },

    /**
     * One or both inputs at once; null takes an input away.
     * @param {Partial<Record<InputKind, Input | null>>} inputs
     */
    put(inputs) {
      const { inputs: before, settings } = store.read();
      // Electrodes were left out of the former table; typing goes on with the same one.
      const other = KINDS.some((kind) => kind in inputs && inputs[kind]?.name !== before[kind]?.name);
      store.write({
        inputs: { ...before, ...inputs },
        settings: other ? { ...settings, exclude: [] } : settings,
      });
      ask();
    },

    /** @param {EngineSettings} settings */
    set(settings) {
      store.write({ settings: { ...store.read().settings, ...settings } });
      ask();
    },

    /** Leaves an electrode out or takes it back. @param {string} label @param {boolean} used */
    use(label, used) {
      const others = (store.read().settings.exclude ?? []).filter((one) => one !== label);
      this.set({ exclude: used ? others : [...others, label] });
    },

    /** Back to the settings of the answer that is shown. */
    restore() {
      const { answer } = store.read();
      if (answer !== null) this.set(answer.settings);
    },

    /** Marks an electrode everywhere. @param {string | null} label */
    point(label) {
      if (store.read().pointed !== label) store.write({ pointed: label });
    },

    /** Shows another map of the table. @param {number} index */
    async choose(index) {
      const { answer } = store.read();
      const map = answer?.maps[index];
      if (client === null || answer === null || map === undefined) return;
      if ("error" in map) {
        store.write({ answer: { ...answer, chosen: index, sheet: null } });
        return;
      }
      store.write({ answer: { ...answer, chosen: index } });
      try {
        const sheet = await client.ask({ kind: "sheet", key: answer.key, index });
        const now = store.read().answer;
        if (now?.key === answer.key && now.chosen === index) store.write({ answer: { ...now, sheet } });
      } catch (fault) {
        if (store.read().answer?.key === answer.key) fail(fault);
      }
    },

    /** The whole report of the present answer. @returns {Promise<Blob | null>} */
    async report() {
      const { answer } = store.read();
      if (client === null || answer === null) return null;
      try {
        return await client.ask({ kind: "report", key: answer.key }, ({ done, total }) => {
          store.write({ progress: { done, total } });
        });
      } catch (fault) {
        fail(fault);
        return null;
      } finally {
        store.write({ progress: null });
      }
    },

    /** Gives up what the engine is at. */
    cancel() {
      const { answer } = store.read();
      if (pending !== null) dropPending();
      else if (answer !== null) client?.giveUp(answer.key);
      store.write({ phase: restingPhase(), progress: null, stopped: true });
    },

    /** Puts the failure away; the previous answer stays. */
    dismiss() {
      store.write({ phase: restingPhase(), failure: null });
    },
  };
}
