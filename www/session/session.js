/**
 * The session: what was put in, what came out. Its functions are the only ones that change the state; views read
 * and watch it.
 */

import { makeStore } from "./store.js";
import { faultOf } from "../engine/fault.js";
import { pageFault } from "../text/faults.js";
import { firstLine, FIRST_SETTINGS, isOtherTable, sentSettings, settingsForOther } from "./settings.js";
import { withTurned, withValueAt } from "./settings.js";

/** @import { EngineClient } from "../engine/pool/client.js" */

/** @typedef {ReturnType<typeof makeSession>} Session */

/** @type {InputKind[]} */
const KINDS = ["electrodes", "maps"];

export function makeSession() {
  const store = makeStore(
    /** @type {SessionState} */ ({
      phase: "loading",
      program: null,
      inputs: { electrodes: null, maps: null },
      settings: FIRST_SETTINGS,
      changed: [],
      heads: [],
      example: null,
      setAside: null,
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
    const { inputs, settings, example, answer: before } = store.read();
    // The worker has read these tables for the present answer: it needs no more than the other settings.
    const from = before?.inputs === inputs ? before.key : null;
    dropPending(from === null);
    if (inputs.maps === null) {
      if (before !== null) client.forget(before.key);
      store.write({ phase: "ready", answer: null, failure: null, progress: null, stopped: false });
      return;
    }
    /** @type {EngineRequest} */
    const request = { maps: inputs.maps.content, settings: sentSettings(settings) };
    if (inputs.electrodes !== null) request.electrodes = inputs.electrodes.content;
    const key = client.name(request, from);
    pending = key;
    store.write({ phase: "busy", failure: null, progress: null, stopped: false });
    try {
      const { preamble, count } = await client.ask({ kind: "open", key });
      if (pending !== key) return;
      const names = { electrodes: inputs.electrodes?.name ?? null, maps: inputs.maps.name };
      /** @type {Answer} */
      const draft = { key, names, inputs, example, settings, preamble, count, maps: [], fitted: 0, chosen: 0, sheet: null };
      // The same tables under other settings: the same map stays in view and is answered before the others.
      if (before !== null && before.count === count && before.names.maps === names.maps) {
        draft.maps = [...before.maps];
        draft.chosen = before.chosen;
        // A map that cannot be fitted under these settings is found out below.
        const sheet = await client.ask({ kind: "sheet", key, index: draft.chosen }).catch(() => null);
        if (sheet !== null) present(draft, sheet);
      }
      await fitMaps(draft);
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

  /** Fits every map. @param {Answer} draft becomes the answer as soon as one of its maps is fitted, if it is not yet */
  async function fitMaps(draft) {
    if (client === null || (pending !== draft.key && store.read().answer?.key !== draft.key)) return;
    const { key, maps } = draft;
    /** @type {Promise<void> | null} */
    let shown = null;
    await client.ask({ kind: "fitAll", key }, (step) => {
      const from = step.done - step.maps.length;
      step.maps.forEach((map, at) => {
        maps[from + at] = map;
      });
      draft.fitted = step.done;
      const progress = step.done < step.total ? { done: step.done, total: step.total } : null;
      const answer = store.read().answer;
      if (answer?.key === key) return store.write({ answer: { ...answer, fitted: step.done }, progress });
      if (pending !== key) return;
      store.write({ progress });
      const kept = draft.chosen < step.done ? maps[draft.chosen] : undefined;
      const first = maps.slice(0, step.done).findIndex((map) => "rv" in map);
      const fitted = kept !== undefined && "rv" in kept ? draft.chosen : first;
      if (shown !== null || kept === undefined || fitted < 0) return;
      shown = show({ ...draft, chosen: fitted });
      // Given up together with the fits, nobody asks for it below.
      shown.catch(() => {});
    });
    if (shown !== null) return shown;
    const first = maps[0];
    if (pending === key && first !== undefined && "error" in first) throw first.error;
  }

  /** @param {Answer} draft */
  async function show(draft) {
    if (client === null || pending !== draft.key) return;
    present(draft, await client.ask({ kind: "sheet", key: draft.key, index: draft.chosen }));
  }

  /** @param {Answer} draft becomes the answer, unless nobody waits for it any more @param {Sheet} sheet */
  function present(draft, sheet) {
    if (pending !== draft.key) return;
    pending = null;
    const before = store.read().answer;
    if (before !== null) client?.forget(before.key);
    store.write({ phase: "answered", answer: { ...draft, sheet } });
  }

  return {
    read: store.read,
    watch: store.watch,
    fail,

    /**
     * The engine has answered its first calls.
     * @param {EngineClient} ready
     * @param {Program} program
     * @param {CatalogueHead[]} heads
     */
    engineReady(ready, program, heads) {
      client = ready;
      announce(ready);
      store.write({ phase: store.read().phase === "failed" ? "failed" : "ready", program, heads });
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
     * One or both inputs at once; null takes an input away. An invented map gives way as a whole.
     * @param {Partial<Record<InputKind, Input | null>>} inputs
     */
    put(inputs) {
      const { inputs: held, settings, example } = store.read();
      const before = example === null ? held : { electrodes: null, maps: null };
      const other = KINDS.filter((kind) => kind in inputs && isOtherTable(held[kind], inputs[kind] ?? null));
      const kept = settingsForOther(settings, example === null ? other : KINDS);
      store.write({
        inputs: { ...before, ...inputs },
        settings: example === null ? kept : { ...kept, mapUnit: FIRST_SETTINGS.mapUnit },
        changed: [],
        example: null,
        setAside: null,
      });
      ask();
    },

    /**
     * A table as it is typed on; of an invented map too, which then is no longer the one that was planted.
     * @param {InputKind} kind
     * @param {Input | null} input
     */
    edit(kind, input) {
      const { inputs, settings, example } = store.read();
      if (example === null || input === null) return this.put({ [kind]: input });
      const same = inputs[kind] !== null && firstLine(inputs[kind]) === firstLine(input);
      store.write({
        inputs: { ...inputs, [kind]: input },
        settings: same ? settings : settingsForOther(settings, [kind]),
        changed: [],
        example: { ...example, edited: true },
      });
      ask();
    },

    /** Shows an invented map; what was put in before can be taken back. @param {Example} example */
    show(example) {
      const { inputs, settings, example: before, setAside } = store.read();
      const own = before === null && KINDS.some((kind) => inputs[kind] !== null);
      store.write({
        inputs: { electrodes: example.electrodes, maps: example.maps },
        settings: { ...settingsForOther(settings, KINDS), mapUnit: example.unit ?? FIRST_SETTINGS.mapUnit },
        changed: [],
        example: { name: example.name, title: example.title, edited: false },
        setAside: own ? { inputs, settings } : setAside,
      });
      ask();
    },

    /** Takes back what an invented map has replaced. */
    takeBack() {
      const { setAside } = store.read();
      if (setAside === null) return;
      store.write({ ...setAside, changed: [], example: null, setAside: null });
      ask();
    },

    /** @param {Partial<PageSettings>} settings */
    set(settings) {
      store.write({ settings: { ...store.read().settings, ...settings }, changed: Object.keys(settings) });
      ask();
    },

    /** Turns the sign of the map that is shown, or turns it back. */
    turnSign() {
      const { answer, settings } = store.read();
      if (answer !== null) this.set({ flip: withTurned(settings.flip, answer.chosen) });
    },

    /** Standard deviation of the shown map's activation. @param {number | null} value */
    setActivation(value) {
      const { answer, settings } = store.read();
      if (answer !== null) this.set({ activationSd: withValueAt(settings.activationSd, answer.chosen, value) });
    },

    /** Leaves an electrode out or takes it back. @param {string} label @param {boolean} used */
    use(label, used) {
      const others = store.read().settings.exclude.filter((one) => one !== label);
      this.set({ exclude: used ? others : [...others, label] });
    },

    /** Back to the tables and settings of the answer that is shown. */
    restore() {
      const { answer } = store.read();
      if (answer === null) return;
      const { inputs, settings, example } = answer;
      store.write({ inputs, settings, example, changed: [] });
      ask();
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
