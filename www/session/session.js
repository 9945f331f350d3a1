/**
 * The session: what was put in, what came out. Its functions are the only ones that change the state; views read
 * and watch it.
 */

import { makeStore } from "./store.js";
import { faultOf } from "../engine/fault.js";
import { pageFault } from "../text/faults.js";
import { heldBytes, isEmpty, namedFiles, NO_INPUTS, placedInputs, toldRoles } from "./inputs.js";
import { emptyDecomposition, mirrored } from "./decompositions.js";
import { isMisfit, isUnreadable } from "./help.js";
import { differingSettings, firstLine, FIRST_SETTINGS, isOtherTable, sentSettings, settingsForOther } from "./settings.js";
import { settingsOfFiles, settingsWith, withTurned, withValueAt } from "./settings.js";

/** @import { EngineClient } from "../engine/pool/client.js" */

/** @typedef {ReturnType<typeof makeSession>} Session */

/** @type {InputKind[]} */
const KINDS = ["electrodes", "maps"];

/** Steps that can be undone, and bytes of files that are kept for them. */
const MOST_STEPS = 50;
const MOST_PAST_BYTES = 2 ** 27;

/** Whether a setting says what a file is. @param {string[]} path */
function isRole(path) {
  return path[0] === "files" && path[2] === "role";
}

export function makeSession() {
  const held = makeStore(
    /** @type {SessionState} */ ({
      phase: "loading",
      program: null,
      inputs: NO_INPUTS,
      settings: FIRST_SETTINGS,
      changed: [],
      past: [],
      said: null,
      refused: null,
      heads: [],
      offers: [],
      example: null,
      setAside: null,
      decompositions: [emptyDecomposition(1)],
      current: 1,
      columns: [],
      answer: null,
      failure: null,
      pointed: null,
      progress: null,
      stopped: false,
    }),
  );

  const store = {
    ...held,
    /** @param {Partial<SessionState>} patch */
    write(patch) {
      const state = { ...held.read(), ...patch };
      const decompositions = mirrored(state);
      const same = decompositions.every((one, at) => one === state.decompositions[at]);
      held.write(same ? patch : { ...patch, decompositions });
    },
  };

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

  /** @param {SessionState} state @param {string[]} what @returns {Step} */
  function stepOf({ decompositions, current, setAside }, what) {
    return { decompositions: decompositions.map((one) => ({ ...one, answer: null })), current, setAside, what };
  }

  /**
   * One change of inputs or settings, which can be undone.
   * @param {Partial<SessionState>} patch
   * @param {string[]} what changes: settings by name, or "input"
   */
  function step(patch, what) {
    const state = store.read();
    const steps = [...state.past.slice(1 - MOST_STEPS), stepOf(state, what)];
    const held = () => heldBytes(steps.flatMap(({ decompositions }) => decompositions.map(({ inputs }) => inputs)));
    while (steps.length > 1 && held() > MOST_PAST_BYTES) steps.shift();
    store.write({ past: steps, said: null, refused: null, changed: [], ...patch });
  }

  /** Inputs that came as a whole and led to no answer give way to those of the answer. @param {SessionState} before */
  function refuse({ inputs, settings, example, setAside, past, said }) {
    const { inputs: refusedInputs, settings: refusedSettings } = store.read();
    const refused = { inputs: refusedInputs, settings: refusedSettings };
    store.write({ inputs, settings, example, setAside, past, said, refused });
  }

  /**
   * Other inputs, with what of the settings outlives the exchange.
   * @param {Inputs} inputs
   * @param {Input[]} [replaced]
   */
  function exchange(inputs, replaced = []) {
    const { inputs: held, settings, example } = store.read();
    const other = KINDS.filter((kind) => held[kind] !== inputs[kind] && isOtherTable(held[kind], inputs[kind]));
    const names = namedFiles(inputs).map(({ name }) => name);
    const kept = settingsOfFiles(settingsForOther(settings, example === null ? other : KINDS), names);
    const dropped = differingSettings(settings, kept);
    step(
      {
        inputs,
        settings: example === null ? kept : { ...kept, mapUnit: FIRST_SETTINGS.mapUnit },
        example: null,
        setAside: null,
        said: { replaced: example === null ? replaced.map(({ name }) => name) : [], dropped },
      },
      ["input"],
    );
  }

  /** Files that were refused, without those that are there. @param {SessionState} state */
  function refusedFiles({ refused, inputs }) {
    const known = namedFiles(inputs).map(({ input }) => input);
    return namedFiles(refused?.inputs ?? NO_INPUTS).filter(({ input }) => !known.includes(input));
  }

  /**
   * Files come in, each to its place; what cannot be read goes to the maps, where reading it says what is wrong.
   * @param {Input[]} given
   * @param {boolean} [alone] without those that were refused before
   */
  async function takeIn(given, alone = true) {
    const before = store.read();
    const { inputs, replaced } = placedInputs(before.example === null ? before.inputs : NO_INPUTS, given);
    exchange(inputs, replaced);
    const { said } = store.read();
    const last = before.inputs.maps;
    // Two matrices, one after the other: the second may belong to the first.
    const offered = before.settings.mapsAre === "unmixing" && given.length === 1 && given[0] === inputs.maps;
    if (said !== null && offered && last !== null) store.write({ said: { ...said, sphering: given[0] } });
    await ask(before);
    // Of two tables that belong together, the first to come fits no more than the second, but both may.
    const { failure, refused } = store.read();
    if (!alone || refused === null || !isMisfit(failure) || !isMisfit(before.failure)) return;
    const waiting = refusedFiles(before).map(({ input }) => input);
    const others = waiting.filter(({ role }) => given.every((input) => input.role !== role));
    if (others.length > 0) await takeIn([...others, ...given], false);
  }

  /**
   * Adds files that were refused, one of them as something else, to those of the answer.
   * @param {string[]} path of the setting
   * @param {FileRole | undefined} role
   * @param {NonNullable<SessionState["refused"]>} refused
   */
  function addAs(path, role, refused) {
    const before = store.read();
    const { inputs: held, example } = before;
    const given = refusedFiles(before).map(({ name, input }) =>
      name === path[1] && role !== undefined ? { ...input, name, role } : input,
    );
    const { inputs, replaced } = placedInputs(example === null ? held : NO_INPUTS, given);
    exchange(inputs, replaced);
    const { settings } = store.read();
    const files = { ...settings.files, ...refused.settings.files };
    store.write({ settings: settingsWith({ ...settings, files }, path, role) });
    ask(before);
  }

  /** Puts a file in the place of what it is said to be. @param {string} name @param {FileRole | undefined} role */
  function placeAnew(name, role) {
    const { inputs } = store.read();
    const file = namedFiles(inputs).find((one) => one.name === name);
    if (file === undefined || role === undefined) return;
    /** @param {Input | null} input */
    const without = (input) => (input === file.input ? null : input);
    const rest = {
      maps: without(inputs.maps),
      electrodes: without(inputs.electrodes),
      others: inputs.others.filter((one) => one !== file.input),
    };
    const { inputs: now, replaced } = placedInputs(rest, [{ ...file.input, name, role }]);
    store.write({ inputs: now, said: { replaced: replaced.map((input) => input.name), dropped: [] } });
  }

  /** Asks the engine about the present inputs; an older question nobody waits for any more is given up. */
  /** @param {SessionState} [earlier] what to go back to if inputs that came as a whole lead to no answer */
  async function ask(earlier) {
    if (client === null) return;
    const { inputs, settings, example, answer: before } = store.read();
    const back = earlier !== undefined && (before === null || earlier.inputs === before.inputs) ? earlier : null;
    // The worker has read these tables for the present answer: it needs no more than the other settings.
    const from = before?.inputs === inputs ? before.key : null;
    dropPending(from === null);
    if (inputs.maps === null) {
      if (before !== null) client.forget(before.key);
      store.write({ phase: "ready", answer: null, failure: null, progress: null, stopped: false });
      return;
    }
    /** @type {EngineRequest} */
    const request = {
      files: namedFiles(inputs).map(({ name, input }) => ({ name, content: input.content })),
      settings: sentSettings(settings, toldRoles(inputs)),
    };
    const key = client.name(request, from);
    pending = key;
    store.write({ phase: "busy", failure: null, progress: null, stopped: false });
    try {
      const { preamble, count } = await client.ask({ kind: "open", key });
      if (pending !== key) return;
      const beside = inputs.maps.role === "electrodes-and-maps" ? inputs.maps.name : null;
      const names = { electrodes: inputs.electrodes?.name ?? beside, maps: inputs.maps.name };
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
        const { code } = /** @type {Fault} */ (fault);
        // Without an answer only what cannot be read at all goes again; tables stay, to be mended.
        if (back !== null && code !== "given-up" && (before !== null || isUnreadable(code))) refuse(back);
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
     * @param {ChoiceOffer[]} offers
     */
    engineReady(ready, program, heads, offers) {
      client = ready;
      announce(ready);
      store.write({ phase: store.read().phase === "failed" ? "failed" : "ready", program, heads, offers });
      if (store.read().inputs.maps !== null) ask();
    },

    /**
     * The input with what it is by its content, told as soon as the engine runs; without it where it cannot be read.
     * @param {Input} input
     * @returns {Promise<Input>}
     */
    async recognised(input) {
      const engine = await started;
      try {
        return { ...input, role: await engine.ask({ kind: "roleOf", name: input.name, content: input.content }) };
      } catch (fault) {
        return { ...input, fault: /** @type {Fault} */ (fault) };
      }
    },

    /**
     * Files in any order, told apart by their content. What was there for the same purpose gives way, and an invented
     * map as a whole. One that cannot be read does not keep the others out.
     * @param {(Input | Promise<Input>)[]} given
     */
    async add(given) {
      const taken = await Promise.allSettled(given.map(async (input) => this.recognised(await input)));
      const inputs = taken.flatMap((one) => (one.status === "fulfilled" ? [one.value] : []));
      const readable = inputs.filter(({ role }) => role !== undefined);
      const spoilt = inputs.filter(({ role }) => role === undefined);
      if (inputs.length > 0) await takeIn(readable.length > 0 ? readable : spoilt);
      if (store.read().failure !== null) return;
      const refused = taken.find((one) => one.status === "rejected");
      const fault = refused === undefined ? spoilt[0]?.fault : refused.reason;
      if (fault === undefined) return;
      const { inputs: kept, settings } = store.read();
      store.write({ refused: { inputs: kept, settings } });
      fail(fault);
    },

    /** Puts a sphering matrix beside an unmixing matrix. @param {Input} input */
    addSphering(input) {
      const before = store.read();
      const sphering = /** @type {Input} */ ({ ...input, role: "sphering" });
      const { inputs, replaced } = placedInputs(before.inputs, [sphering]);
      exchange(inputs, replaced);
      const file = namedFiles(inputs).find((one) => one.input === sphering);
      const path = ["files", file?.name ?? "", "role"];
      store.write({ settings: settingsWith(store.read().settings, path, "sphering") });
      ask(before);
    },

    /** What took the place of an unmixing matrix is its sphering matrix after all. */
    takeAsSphering() {
      const input = store.read().said?.sphering;
      if (input === undefined) return;
      this.undo();
      this.addSphering(input);
    },

    /**
     * One or both boxes at once; null empties one. An invented map gives way as a whole.
     * @param {Partial<Record<InputKind, Input | null>>} inputs
     */
    put(inputs) {
      const { inputs: held, example } = store.read();
      exchange({ ...(example === null ? held : NO_INPUTS), ...inputs });
      ask();
    },

    /** Takes a file away that stands beside the boxes. @param {Input} input */
    remove(input) {
      const { inputs } = store.read();
      exchange({ ...inputs, others: inputs.others.filter((one) => one !== input) });
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
      const next = { ...inputs, [kind]: input };
      const kept = same ? settings : settingsForOther(settings, [kind]);
      step({ inputs: next, settings: kept, example: { ...example, edited: true } }, ["input"]);
      ask();
    },

    /** Shows an invented map; what was put in before can be taken back. @param {Example} example */
    show(example) {
      const { inputs, settings, example: before, setAside } = store.read();
      step(
        {
          inputs: { ...NO_INPUTS, electrodes: example.electrodes, maps: example.maps },
          settings: { ...settingsForOther(settings, KINDS), files: undefined, mapUnit: example.unit ?? FIRST_SETTINGS.mapUnit },
          example: { name: example.name, title: example.title, edited: false },
          setAside: before === null && !isEmpty(inputs) ? { inputs, settings } : setAside,
        },
        ["input"],
      );
      ask();
    },

    /** Takes back what an invented map has replaced. */
    takeBack() {
      const { setAside } = store.read();
      if (setAside === null) return;
      step({ ...setAside, example: null, setAside: null }, ["input"]);
      ask();
    },

    /** @param {Partial<PageSettings>} settings */
    set(settings) {
      const changed = Object.keys(settings);
      step({ settings: { ...store.read().settings, ...settings }, changed }, changed);
      ask();
    },

    /** A setting by its place; undefined leaves it to the engine. @param {string[]} path @param {unknown} value */
    setAt(path, value) {
      const { settings } = store.read();
      step({ settings: settingsWith(settings, path, value), changed: [path[0]] }, [path[0]]);
      if (isRole(path)) placeAnew(path[1], /** @type {FileRole} */ (value));
      ask();
    },

    /**
     * A setting that may make sense of files: of those that were refused, which are then tried again, or else of those
     * that are there.
     * @param {string[]} path
     * @param {unknown} value
     */
    tryAt(path, value) {
      const before = store.read();
      const { refused } = before;
      if (refused === null) return this.setAt(path, value);
      if (isRole(path)) return addAs(path, /** @type {FileRole} */ (value), refused);
      const settings = settingsWith(refused.settings, path, value);
      step({ inputs: refused.inputs, settings, example: null, setAside: null, changed: [path[0]] }, [path[0]]);
      ask(before);
    },

    /** Back by one change. */
    undo() {
      const { past } = store.read();
      const last = past.at(-1);
      if (last === undefined) return;
      const { decompositions, current, setAside } = last;
      const live = store.read().decompositions;
      const restored = decompositions.map((one) => ({ ...one, answer: live.find(({ id }) => id === one.id)?.answer ?? null }));
      const { inputs, settings, example } = restored.find(({ id }) => id === current) ?? restored[0];
      const back = { decompositions: restored, current, inputs, settings, example, setAside };
      store.write({ ...back, past: past.slice(0, -1), changed: [], said: null, refused: null });
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
      step({ inputs, settings, example }, ["input"]);
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
      store.write({ phase: restingPhase(), failure: null, refused: null });
    },
  };
}
