/**
 * The session: what was put in, what came out. Its functions are the only ones that change the state; views read
 * and watch it.
 */

import { makeBeyond } from "./beyond.js";
import { makeExplanations, UNEXPLAINED } from "./explanations.js";
import { makeCourses } from "./courses.js";
import { makeFitting } from "./fitting.js";
import { makeInquiries } from "./inquiries.js";
import { makePaper } from "./paper.js";
import { makePopulations } from "./populations.js";
import { makeSaving } from "./saving.js";
import { makeSideBySide } from "./side_by_side.js";
import { makeStore } from "./store.js";
import { faultOf } from "../engine/fault.js";
import { pageFault } from "../text/faults.js";
import { emptyDecomposition, entitiesOf, groupedInputs, mirrored, newDecompositions, SHARED } from "./decompositions.js";
import { MANY, recognisedInNeed } from "./recognition.js";
import { heldBytes, isEmpty, namedFiles, NO_INPUTS, placedInputs } from "./inputs.js";
import { isMisfit, isUnreadable } from "./help.js";
import { differingSettings, firstLine, FIRST_SETTINGS, isOtherTable, settingsForOther } from "./settings.js";
import { ownFormat } from "./work.js";
import { settingsOfFiles, settingsWith, withTurned, withValueAt } from "./settings.js";

/** @import { Pool } from "../engine/pool/pool.js" */

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
      arriving: false,
      threshold: 0.1,
      namesShown: false,
      populations: null,
      explained: UNEXPLAINED,
      suspects: null,
      listed: [],
    }),
  );

  /** Columns of the table of maps by the maps' unit. @type {Partial<Record<MapUnit, TableColumn[]>>} */
  let columnsOf = {};
  /** With what follows from it. @param {Partial<SessionState>} patch */
  const whole = (patch) => {
    const state = { ...held.read(), ...patch };
    const columns = columnsOf[state.settings.mapUnit] ?? state.columns;
    return { ...patch, decompositions: mirrored(state), columns };
  };
  const store = {
    ...held,
    /** @param {Partial<SessionState>} patch */
    write: (patch) => held.write(whole(patch)),
    /** @param {Partial<SessionState>} patch @param {boolean} [shown] */
    writeFirst: (patch, shown) => held.writeFirst(whole(patch), shown),
  };

  /** @type {Pool | null} */
  let client = null;
  /** @type {(client: Pool) => void} */
  let announce = () => {};
  /** @type {Promise<Pool>} */
  const started = new Promise((resolve) => {
    announce = resolve;
  });
  /** @param {unknown} error an error, or a fault as it came from the worker */
  function fail(error) {
    const fault = /** @type {Fault} */ (
      error !== null && typeof error === "object" && !(error instanceof Error) && "code" in error
        ? error
        : faultOf(error)
    );
    if (fault.code !== "given-up") store.write({ phase: "failed", failure: pageFault(fault) });
  }

  const fitting = makeFitting(store, () => client, fail);

  /** @param {SessionState} state @param {string[]} what @returns {Step} */
  function stepOf({ decompositions, current, setAside }, what) {
    return { decompositions, current, setAside, what };
  }

  /**
   * One change of inputs or settings, which can be undone.
   * @param {Partial<SessionState>} patch
   * @param {string[]} what changes: settings by name, or "input"
   * @param {(patch: Partial<SessionState>) => void} [write]
   */
  function step(patch, what, write = store.write) {
    const state = store.read();
    const kept = patch.decompositions ?? state.decompositions;
    // Answers of those that stay go on; those of the others are there again when it is undone.
    const before = state.decompositions.map((one) => (kept.some(({ id }) => id === one.id) ? { ...one, answer: null } : one));
    const moved = patch.threshold === undefined ? {} : { threshold: state.threshold };
    const steps = [...state.past.slice(1 - MOST_STEPS), { ...stepOf({ ...state, decompositions: before }, what), ...moved }];
    const held = () => heldBytes(steps.flatMap(({ decompositions }) => decompositions.map(({ inputs }) => inputs)));
    while (steps.length > 1 && held() > MOST_PAST_BYTES) steps.shift();
    write({ past: steps, said: null, refused: null, changed: [], ...patch });
  }

  /** Decompositions as they were, with the answers that there are for them. @param {Decomposition[]} wanted */
  function restored(wanted) {
    const live = store.read().decompositions;
    return wanted.map((one) => {
      const now = live.find(({ id }) => id === one.id);
      return now === undefined ? fitting.revived(one) : { ...one, answer: now.answer, failure: now.failure };
    });
  }

  /** Decompositions as they were, and the current one of them in the state. @param {Pick<Step, "decompositions" | "current">} before */
  function backTo({ decompositions: wanted, current }) {
    const decompositions = restored(wanted);
    const { inputs, settings, example, answer, failure } = decompositions.find(({ id }) => id === current) ?? decompositions[0];
    const shown = store.read().current === current ? store.read().answer : answer;
    return { decompositions, current, inputs, settings, example, answer: shown, failure };
  }

  /** Inputs that came as a whole and led to no answer give way to those of the answer. @param {SessionState} before */
  function refuse(before) {
    const { inputs, settings } = store.read();
    const { setAside, past, said } = before;
    store.write({ ...backTo(before), setAside, past, said, refused: { inputs, settings } });
    fitting.startOthers();
  }

  /**
   * Other inputs, with what of the settings outlives the exchange.
   * @param {Inputs} inputs
   * @param {Input[]} [replaced]
   * @param {(patch: Partial<SessionState>) => void} [write]
   */
  function exchange(inputs, replaced = [], write = store.write) {
    const { inputs: held, settings, example, decompositions, current } = store.read();
    const other = KINDS.filter((kind) => held[kind] !== inputs[kind] && isOtherTable(held[kind], inputs[kind]));
    const names = namedFiles(inputs).map(({ name }) => name);
    const own = settingsOfFiles(settingsForOther(settings, example === null ? other : KINDS), names);
    // What goes for all stays while there are others.
    const shared = Object.fromEntries(SHARED.filter((key) => settings[key] !== undefined).map((key) => [key, settings[key]]));
    const kept = decompositions.length > 1 ? { ...own, ...shared } : own;
    const former = decompositions.find(({ id }) => id === current);
    const replacing = example === null && held.maps !== null && replaced.includes(held.maps);
    const dropped = differingSettings(settings, kept);
    step(
      {
        inputs,
        settings: example === null ? kept : { ...kept, mapUnit: FIRST_SETTINGS.mapUnit },
        example: null,
        setAside: null,
        said: {
          replaced: example === null ? replaced.map(({ name }) => name) : [],
          dropped,
          former: replacing ? former : undefined,
        },
      },
      ["input"],
      write,
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
    const groups = groupedInputs(given, before.example === null ? before.inputs : NO_INPUTS);
    if (groups.length > 1) return takeSeveral(groups, false);
    const [own] = groupedInputs(given, before.inputs, 1);
    const one = before.decompositions.find(({ id }) => id === before.current);
    const subject = own === undefined ? "" : entitiesOf(own.maps?.name ?? "").subject;
    // The table of another subject stands beside the others.
    if (own !== undefined && subject !== "" && one !== undefined && one.subject !== "" && one.subject !== subject) {
      return takeSeveral([own], true);
    }
    const { inputs, replaced } = placedInputs(before.example === null ? before.inputs : NO_INPUTS, given);
    // The engine is asked before the views are told: they are written while it reads.
    exchange(inputs, replaced, store.writeFirst);
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
   * Several tables of maps come in, each a decomposition of its own, in the place of the current one or beside it.
   * @param {Inputs[]} groups
   * @param {boolean} beside
   */
  async function takeSeveral(groups, beside) {
    const { decompositions, current, example, inputs } = store.read();
    const at = decompositions.findIndex(({ id }) => id === current);
    const former = decompositions[at];
    const stays = beside && inputs.maps !== null;
    const rest = decompositions.filter((one) => stays || one !== former);
    // Settings of tables that give way go with them, as for a single one.
    const plain = { ...former, settings: { ...settingsForOther(former.settings, KINDS), files: undefined } };
    const made = newDecompositions(groups, stays || rest.length > 0 ? former : plain, rest);
    const gone = !stays && example === null && inputs.maps !== null;
    const [first] = made;
    const next = [...rest.slice(0, stays ? at + 1 : at), ...made, ...rest.slice(stays ? at + 1 : at)];
    step(
      {
        decompositions: next,
        current: first.id,
        inputs: first.inputs,
        settings: first.settings,
        example: null,
        answer: null,
        failure: null,
        setAside: null,
        said: { replaced: gone ? namedFiles(inputs).map(({ name }) => name) : [], dropped: [], former: gone ? former : undefined },
      },
      ["input"],
      store.writeFirst,
    );
    await ask();
    await passOver(first.id, made.map(({ id }) => id));
  }

  /**
   * The first of many tables is asked about before the others are recognised, if nothing else is there and the electrodes
   * are among what is known.
   * @param {Input[]} known
   */
  function takeEarly(known) {
    const { inputs, decompositions } = store.read();
    if (!isEmpty(inputs) || decompositions.length > 1) return null;
    const [own] = groupedInputs(known, NO_INPUTS, 1);
    if (own === undefined || (own.electrodes === null && own.maps?.role !== "electrodes-and-maps")) return null;
    exchange(own, [], store.writeFirst);
    return { own, answered: ask() };
  }

  /**
   * All files, of which some were taken early.
   * @param {Input[]} given
   * @param {NonNullable<ReturnType<typeof takeEarly>>} early
   */
  async function takeRest(given, { own, answered }) {
    const groups = groupedInputs(given, NO_INPUTS);
    const { inputs, decompositions, current } = store.read();
    /** @param {Inputs} one */
    const filesOf = (one) => [one.maps, one.electrodes, ...one.others];
    const [known, now] = [own, groups[0] ?? NO_INPUTS].map(filesOf);
    const same = known.length === now.length && known.every((input) => now.includes(input));
    // What has changed meanwhile, or belongs together otherwise, is taken as if nothing had been taken early.
    if (inputs !== own || decompositions.length > 1 || !same) return takeIn(given);
    const [former] = decompositions;
    const [first, ...others] = newDecompositions(groups, former, []);
    store.write({ decompositions: [{ ...former, name: first.name, subject: first.subject }, ...others] });
    fitting.startOthers();
    await answered;
    await passOver(current, [current, ...others.map(({ id }) => id)]);
  }

  /** Of tables that came together, one that leads to no answer is told of, and another is shown. @param {number} id @param {number[]} ids */
  async function passOver(id, ids) {
    const isStill = () => store.read().current === id && store.read().answer === null && store.read().failure !== null;
    if (!isStill()) return;
    await fitting.rest();
    const { decompositions, failure, inputs, settings } = store.read();
    const answered = decompositions.find((one) => ids.includes(one.id) && one.answer !== null);
    if (!isStill() || answered === undefined) return;
    await sideBySide.openDecomposition(answered.id);
    const file = inputs.maps?.name ?? "";
    const named = failure === null || failure.message.includes(file) ? failure : { ...failure, message: `${file}: ${failure.message}` };
    store.write({ phase: "failed", failure: named, refused: { inputs, settings, id } });
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

  /** Asks the engine about what is there now, the current decomposition first. */
  /** @param {SessionState} [earlier] what to go back to if inputs that came as a whole lead to no answer */
  async function ask(earlier) {
    const { current, answer: before } = store.read();
    const back = earlier !== undefined && (before === null || earlier.inputs === before.inputs) ? earlier : null;
    const answered = fitting.start(current, (code) => {
      // Without an answer only what cannot be read at all goes again; tables stay, to be mended.
      if (back !== null && (before !== null || isUnreadable(code))) refuse(back);
    });
    fitting.startOthers();
    if (store.read().stopped) store.write({ stopped: fitting.hasUnfinished() });
    await answered;
  }

  /** Asks about what has changed. */
  async function askChanged() {
    const { current, answer, inputs } = store.read();
    const asked = fitting.isAsked(current) && (answer !== null || inputs.maps === null || fitting.isPending());
    if (!asked) return ask();
    const { failure } = store.read();
    store.write({ phase: failure !== null ? "failed" : fitting.isPending() ? "busy" : fitting.restingPhase() });
    fitting.startOthers();
    if (answer !== null && answer.sheet === null) await inquiries.choose(answer.chosen);
  }

  const beyond = makeBeyond(store);
  const inquiries = makeInquiries(store, () => client, { fail, fitting, beyond, explained: () => explanations.explainedMaps() });
  const sideBySide = makeSideBySide(store, () => client, { fitting, step, askChanged, choose: inquiries.choose });

  const { givenPopulations, ...populations } = makePopulations(store, () => client, fail, fitting);
  const explanations = makeExplanations(store, () => client, fail, fitting, givenPopulations);

  const saving = makeSaving(store, inquiries.digest, {
    step,
    ask: () => ask(),
    explained: explanations.explainedMaps,
    explainAgain: explanations.explainAgain,
  });

  return {
    ...inquiries,
    ...sideBySide,
    ...saving,
    ...populations,
    ...explanations,
    ...makeCourses(store, () => client, beyond),
    ...makePaper(store, () => client, { given: givenPopulations, known: explanations.explainedMaps, summary: inquiries.summary, beyond }),
    read: store.read,
    watch: store.watch,
    fail,

    /**
     * The engine has answered its first calls.
     * @param {Pool} ready
     * @param {Program} program
     * @param {CatalogueHead[]} heads
     * @param {ChoiceOffer[]} offers
     * @param {Record<MapUnit, TableColumn[]>} columns
     */
    engineReady(ready, program, heads, offers, columns) {
      client = ready;
      announce(ready);
      columnsOf = columns;
      store.write({ phase: store.read().phase === "failed" ? "failed" : "ready", program, heads, offers });
      if (store.read().inputs.maps !== null) ask();
    },

    /**
     * The input with what it is by its content, told as soon as the engine runs; without it where it cannot be read.
     * @param {Input} input
     * @param {boolean} [aside] by a helper
     * @returns {Promise<Input>}
     */
    async recognised(input, aside = false) {
      const engine = await started;
      if (ownFormat(input.content) !== null) return { ...input, role: "unused" };
      const task = /** @type {const} */ ({ kind: "roleOf", name: input.name, content: input.content });
      try {
        return { ...input, role: await (aside ? engine.askAside(task) : engine.ask(task)) };
      } catch (error) {
        const fault = /** @type {Fault} */ (error);
        // A helper that is lost says nothing about the file.
        return aside && fault.code.startsWith("worker-") ? this.recognised(input) : { ...input, fault };
      }
    },

    /**
     * Files in any order, told apart by their content. What was there for the same purpose gives way, and an invented
     * map as a whole. One that cannot be read does not keep the others out.
     * @param {(Input | Promise<Input>)[]} given
     */
    async add(given) {
      let early = /** @type {ReturnType<typeof takeEarly>} */ (null);
      await this.bring(given, (inputs) => (early === null ? takeIn(inputs) : takeRest(inputs, early)), (known) => {
        early ??= takeEarly(known);
      });
    },

    /** Files beside what is there, each table of maps a decomposition of its own. @param {(Input | Promise<Input>)[]} given */
    async addDecompositions(given) {
      await this.bring(given, (inputs) => {
        const tables = inputs.filter(({ role }) => role === "maps" || role === "electrodes-and-maps");
        const { inputs: held } = store.read();
        if (tables.length === 0 || held.maps === null) return takeIn(inputs);
        const groups = groupedInputs(inputs, held, 1);
        return takeSeveral(groups.length > 0 ? groups : [placedInputs({ ...held, maps: null }, inputs).inputs], true);
      });
    },

    /**
     * @param {(Input | Promise<Input>)[]} given
     * @param {(inputs: Input[]) => Promise<void>} take
     * @param {(known: Input[]) => void} [hear] of many files, those at the beginning that are recognised
     */
    async bring(given, take, hear = () => {}) {
      if (given.length >= MANY) store.write({ arriving: true });
      const taken = await recognisedInNeed(given, (input, aside) => this.recognised(input, aside), hear).finally(() =>
        store.writeFirst({ arriving: false }),
      );
      const inputs = taken.flatMap((one) => (one.status === "fulfilled" ? [one.value] : []));
      const own = inputs.filter(({ content }) => ownFormat(content) !== null);
      // Saved work is a session of its own; beside other files it would be anybody's guess what is meant.
      if (own.length > 0) return given.length === 1 ? saving.restore(own[0].content) : fail({ code: "work-alone", message: "", where: { file: own[0].name }, hint: "" });
      const readable = inputs.filter(({ role }) => role !== undefined);
      const spoilt = inputs.filter(({ role }) => role === undefined);
      if (inputs.length > 0) await take(readable.length > 0 ? readable : spoilt);
      const faults = [
        ...taken.flatMap((one) => (one.status === "rejected" ? [faultOf(one.reason)] : [])),
        ...(readable.length > 0 ? spoilt : spoilt.slice(1)).flatMap(({ fault }) => fault ?? []),
      ].map(pageFault);
      const { inputs: kept, settings, failure } = store.read();
      if (failure !== null && readable.length > 0 && faults.length > 0) {
        store.write({ failure: { ...failure, message: [failure, ...faults].map(({ message }) => message).join(" ") } });
      }
      if (failure !== null || faults.length === 0) return;
      store.write({ refused: { inputs: kept, settings } });
      const [first, ...others] = faults;
      fail({ ...first, message: [first, ...others].map(({ message }) => message).join(" ") });
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
      const { inputs, settings, example: before, setAside, decompositions, current } = store.read();
      const own = { ...settingsForOther(settings, KINDS), files: undefined, mapUnit: example.unit ?? FIRST_SETTINGS.mapUnit };
      const tables = [example.maps, ...example.beside].map((maps) => ({ ...NO_INPUTS, electrodes: example.electrodes, maps }));
      const told = { settings: own, example: { name: example.name, title: example.title, edited: false } };
      const made = newDecompositions(tables, { ...emptyDecomposition(0), settings: own }, []).map((one) => ({ ...one, ...told }));
      // It takes the place of all that is there.
      const several = decompositions.length > 1 || made.length > 1;
      step(
        {
          inputs: tables[0],
          ...told,
          setAside: before === null && !isEmpty(inputs) ? { inputs, settings, decompositions, current } : setAside,
          ...(several ? { decompositions: made, current: made[0].id, answer: null } : {}),
        },
        ["input"],
      );
      ask();
    },

    /** Takes back what an invented map has replaced. */
    takeBack() {
      const { setAside } = store.read();
      if (setAside === null) return;
      const { inputs, settings, ...all } = setAside;
      const several = Math.max(all.decompositions.length, store.read().decompositions.length) > 1;
      const back = several ? backTo(all) : { inputs, settings };
      step({ ...back, example: null, setAside: null }, ["input"]);
      askChanged();
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
      if (refused.id !== undefined) return sideBySide.openDecomposition(refused.id).then(() => this.setAt(path, value));
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
      const { setAside, threshold = store.read().threshold } = last;
      store.write({ ...backTo(last), threshold, failure: null, setAside, past: past.slice(0, -1), changed: [], said: null, refused: null });
      askChanged();
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

    /** Indexes of the maps in the order of the list. @param {number[]} listed */
    setListed(listed) {
      const { listed: before } = store.read();
      if (listed.length !== before.length || listed.some((index, at) => index !== before[at])) store.write({ listed });
    },

    /** The residual variance up to which maps count as near-dipolar. @param {number} threshold */
    setThreshold(threshold) {
      if (store.read().threshold !== threshold) store.write({ threshold });
    },

    /** Whether names of files and people go along with what leaves the page. @param {boolean} namesShown */
    showNames(namesShown) {
      if (store.read().namesShown !== namesShown) store.write({ namesShown });
    },

    /** Gives up what the engine is at. */
    cancel() {
      fitting.cancel();
      populations.stopPopulations();
      explanations.stopExplaining();
      store.write({ phase: fitting.restingPhase(), progress: null, stopped: true });
    },

    /** Whether something was given up that can be fitted. */
    hasUnfinished: () => fitting.hasUnfinished(),

    /** Goes on with what was given up. */
    fitRest() {
      store.write({ stopped: false });
      populations.drawPopulations();
      fitting.fitRest();
    },

    /** Puts the failure away; the previous answer stays. */
    dismiss() {
      store.write({ phase: fitting.restingPhase(), failure: null, refused: null });
    },
  };
}
