/** Several tables of maps side by side: which files belong together, what they are called, and what they share. */

import { BELONGING, NO_INPUTS, PASTED, placedInputs } from "./inputs.js";
import { BOUND, FIRST_SETTINGS, settingsForOther } from "./settings.js";

/** What of the current decomposition stands in the state itself. @type {("inputs" | "settings" | "example" | "answer" | "failure")[]} */
const MIRRORED = ["inputs", "settings", "example", "answer", "failure"];

/** Settings that go for all decompositions. @type {(keyof PageSettings)[]} */
export const SHARED = ["head", "exclude", "interpolated", "unusualHead", "errors", "sources", "limits"];

/** The maps of an answer that are fitted under its settings; those after them are of earlier ones. @param {Answer | null | undefined} answer */
export function freshMaps(answer) {
  return answer ? answer.maps.slice(0, answer.fitted) : [];
}

/** @param {number} id @returns {Decomposition} */
export function emptyDecomposition(id) {
  return {
    id,
    name: "",
    typed: false,
    subject: "",
    information: null,
    begin: 0,
    inputs: NO_INPUTS,
    settings: FIRST_SETTINGS,
    example: null,
    answer: null,
    failure: null,
  };
}

let latestId = 1;

/** An id that none has had. @param {Decomposition[]} all */
export function nextId(all) {
  latestId = Math.max(latestId, ...all.map(({ id }) => id)) + 1;
  return latestId;
}

/** The subject and the session that a file's name says by its entities (BIDS). @param {string} name */
export function entitiesOf(name) {
  /** @param {string} key */
  const entity = (key) => new RegExp(`(?:^|[_/])${key}-([A-Za-z0-9]+)`).exec(name)?.[1] ?? "";
  return { subject: entity("sub"), session: entity("ses") };
}

/** A file's name without its ending and its subject. @param {string} file */
function stemOf(file) {
  const stem = file.replace(/\.[A-Za-z0-9]{1,5}$/, "");
  return stem.replace(/(^|_)sub-[A-Za-z0-9]+(_|$)/, "$1").replace(/_$/, "") || stem;
}

/**
 * Names after files that came together, without the parts that all have in common where something else is left.
 * @param {string[]} files
 */
export function namesOf(files) {
  const stems = files.map((file) => stemOf(file).split(/([_\s.]+)/));
  const distinct = new Set(stems.map((stem) => stem.join("")));
  if (distinct.size < 2) return stems.map((stem) => stem.join(""));
  const shortest = Math.min(...stems.map(({ length }) => length));
  /** @param {(stem: string[], at: number) => string} part */
  const common = (part) => {
    let count = 0;
    while (count < shortest && stems.every((stem) => part(stem, count) === part(stems[0], count))) count++;
    return count;
  };
  // A part and what divides it from the next go together.
  const front = 2 * Math.floor(common((stem, at) => stem[at]) / 2);
  const back = 2 * Math.floor(common((stem, at) => stem[stem.length - 1 - at]) / 2);
  const cut = stems.map((stem) => stem.slice(front, stem.length - back).join(""));
  return cut.every((name) => name !== "") ? cut : stems.map((stem) => stem.join(""));
}

/** What a decomposition is named after; nothing without maps. @param {Inputs} inputs */
function fileOf({ maps }) {
  return maps === null ? "" : maps.name || PASTED.maps;
}

/**
 * New decompositions for tables that came together.
 * @param {Inputs[]} groups
 * @param {Decomposition} beside what they share settings with
 * @param {Decomposition[]} all those that are there
 */
export function newDecompositions(groups, beside, all) {
  const names = namesOf(groups.map(fileOf));
  /** @type {Decomposition[]} */
  const made = [];
  groups.forEach((inputs, at) => {
    const { subject } = entitiesOf(fileOf(inputs));
    const name = uniqueName(names[at], subject, [...all, ...made]);
    made.push({ ...emptyDecomposition(nextId(all)), inputs, name, subject, settings: settingsBeside(inputs, beside) });
  });
  return made;
}

/**
 * A name that no other decomposition of the same subject has. Of several subjects, decompositions may have one name: they are
 * then compared as one.
 * @param {string} wanted
 * @param {string} subject
 * @param {Decomposition[]} others
 */
export function uniqueName(wanted, subject, others) {
  let name = wanted;
  for (let count = 2; others.some((one) => one.name === name && one.subject === subject); count++) name = `${wanted} (${count})`;
  return name;
}

/** How well a file that stands beside tables belongs to one of them; none if it is another's. @param {Input} input @param {Input} table */
function kinship(input, table) {
  const [own, other] = [entitiesOf(input.name), entitiesOf(table.name)];
  let score = 0;
  for (const key of /** @type {const} */ (["subject", "session"])) {
    if (own[key] === "") continue;
    if (own[key] !== other[key]) return null;
    score += 1000;
  }
  const letters = [...input.name];
  const differing = letters.findIndex((letter, at) => letter !== table.name[at]);
  return score + (differing < 0 ? letters.length : differing);
}

/**
 * Tables of maps that came together, each with the files beside it: those of its subject and session, and those that say
 * nothing of either.
 * @param {Input[]} given
 * @param {Inputs} held gives the electrodes where none came
 * @param {number} least tables there must be
 * @returns {Inputs[]} none or one where the files belong to one decomposition
 */
export function groupedInputs(given, held, least = 2) {
  // A matrix with such a name may belong to another one: the engine asks.
  const tables = given.filter(({ name, role }) => (role === "maps" || role === "electrodes-and-maps") && !/spher|whiten/i.test(name));
  if (tables.length < least) return [];
  const beside = given.filter((input) => !tables.includes(input));
  if (beside.some(({ role }) => role === "maps")) return [];
  return tables.map((table) => {
    /** @type {Input[]} */
    const own = [];
    for (const role of new Set(beside.map((input) => input.role))) {
      const alike = beside.filter((input) => input.role === role);
      const scored = alike.map((input) => ({ input, score: kinship(input, table) }));
      const best = Math.max(...scored.map(({ score }) => score ?? -1));
      own.push(...scored.filter(({ score }) => score !== null && score === best).map(({ input }) => input));
    }
    const electrodes = held.electrodes !== null && kinship(held.electrodes, table) !== null && table.role !== "electrodes-and-maps";
    const base = electrodes ? { ...NO_INPUTS, electrodes: held.electrodes, others: besideElectrodes(held) } : NO_INPUTS;
    return placedInputs(base, [table, ...own]).inputs;
  });
}

/** What stands beside a table of electrodes and says something about it. @param {Inputs} inputs */
function besideElectrodes({ others }) {
  return others.filter(({ role }) => role !== undefined && BELONGING.electrodes.includes(role));
}

/**
 * Settings of a decomposition with what it shares with another: always what goes for all, and all that is said of the
 * electrodes where they are the same table.
 * @param {Decomposition} one
 * @param {Pick<Decomposition, "inputs" | "settings">} other
 * @returns {PageSettings}
 */
export function sharedSettings(one, other) {
  const { electrodes } = other.inputs;
  const same = electrodes !== null && one.inputs.electrodes === electrodes;
  const keys = same ? [...SHARED, ...BOUND.electrodes] : SHARED;
  const rest = Object.fromEntries(Object.entries(one.settings).filter(([key]) => !keys.includes(/** @type {any} */ (key))));
  const taken = Object.fromEntries(Object.entries(other.settings).filter(([key]) => keys.includes(/** @type {any} */ (key))));
  const settings = /** @type {PageSettings} */ ({ ...FIRST_SETTINGS, ...rest, ...taken });
  const file = same ? other.settings.files?.[electrodes.name] : undefined;
  if (!same || JSON.stringify(file) === JSON.stringify(settings.files?.[electrodes.name])) return settings;
  const { [electrodes.name]: _, ...files } = settings.files ?? {};
  return { ...settings, files: file === undefined ? files : { ...files, [electrodes.name]: file } };
}

/** Settings of a new decomposition beside another. @param {Inputs} inputs @param {Pick<Decomposition, "inputs" | "settings">} other */
export function settingsBeside(inputs, other) {
  const { files: _, ...plain } = settingsForOther(other.settings, ["maps", "electrodes"]);
  return sharedSettings({ ...emptyDecomposition(0), inputs, settings: plain }, other);
}

/**
 * The current decomposition keeps up with the state, and the others with what they share with it. One that has another file
 * is named after it.
 * @param {SessionState} state
 * @returns {Decomposition[]}
 */
export function mirrored(state) {
  const { current, inputs, settings, example, answer, failure } = state;
  // Rasters are kept for the map in view alone.
  const spare = (/** @type {Decomposition} */ one) => one.id !== current && one.answer?.sheet;
  const decompositions = !state.decompositions.some(spare)
    ? state.decompositions
    : state.decompositions.map((one) => (one.answer !== null && spare(one) ? { ...one, answer: { ...one.answer, sheet: null, trust: null } } : one));
  const before = decompositions.find(({ id }) => id === current);
  if (before === undefined || MIRRORED.every((key) => before[key] === state[key])) return decompositions;
  const changed = before.settings !== settings || before.inputs !== inputs;
  return decompositions.map((one) => {
    if (one !== before) return changed ? following(one, before, state) : one;
    const kept = { ...one, inputs, settings, example, answer, failure };
    const file = fileOf(inputs);
    if (file === fileOf(one.inputs)) return kept;
    const { subject } = entitiesOf(file);
    const others = decompositions.filter((other) => other !== one);
    return { ...kept, name: uniqueName(namesOf([file])[0], subject, others), typed: false, subject, information: null, begin: 0 };
  });
}

/**
 * Another decomposition after a change of the current one.
 * @param {Decomposition} one
 * @param {Decomposition} before
 * @param {SessionState} state
 * @returns {Decomposition}
 */
function following(one, before, { inputs, settings }) {
  let next = one;
  // Electrodes that are exchanged under the same maps are exchanged for all who have them.
  if (before.inputs.maps === inputs.maps && one.inputs.maps !== null && one.inputs.electrodes === before.inputs.electrodes) {
    const [gone, come] = [besideElectrodes(before.inputs), besideElectrodes(inputs)];
    const moved = gone.length !== come.length || gone.some((input) => !come.includes(input));
    if (before.inputs.electrodes !== inputs.electrodes || moved) {
      const rest = one.inputs.others.filter((input) => !gone.includes(input));
      next = { ...one, inputs: { ...one.inputs, electrodes: inputs.electrodes, others: [...rest, ...come] } };
    }
  }
  const shared = sharedSettings(next, { inputs, settings });
  return JSON.stringify(shared) === JSON.stringify(next.settings) ? next : { ...next, settings: shared };
}
