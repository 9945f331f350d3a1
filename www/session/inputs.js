/** Which file goes where: two boxes for maps and electrodes, and a list for all that stands beside them. */

/** @type {Inputs} */
export const NO_INPUTS = { electrodes: null, maps: null, others: [] };

/** What a box takes without being told so. @type {Record<InputKind, FileRole[]>} */
const FITTING = { maps: ["maps", "electrodes-and-maps"], electrodes: ["electrodes", "labels"] };

/** What says something about one table alone. @type {Record<InputKind, FileRole[]>} */
export const BELONGING = { maps: ["sphering", "times"], electrodes: ["labels", "coordinates", "channels"] };

/** Names for what was pasted or typed. @type {Record<InputKind, string>} */
export const PASTED = { maps: "pasted maps", electrodes: "pasted electrodes" };

/** @param {Inputs} inputs */
export function isEmpty({ maps, electrodes, others }) {
  return maps === null && electrodes === null && others.length === 0;
}

/** All files with the names that the engine knows them by, each name once. @param {Inputs} inputs */
export function namedFiles({ maps, electrodes, others }) {
  /** @type {{ name: string, input: Input, kind: InputKind | null }[]} */
  const files = [];
  /** @param {Input | null} input @param {InputKind | null} kind */
  const add = (input, kind) => {
    if (input === null) return;
    const wanted = input.name || PASTED[kind ?? "maps"];
    let name = wanted;
    for (let count = 2; files.some((file) => file.name === name); count++) name = `${wanted} (${count})`;
    files.push({ name, input, kind });
  };
  add(maps, "maps");
  add(electrodes, "electrodes");
  for (const input of others) add(input, null);
  return files;
}

/** What boxes say about files whose content reads otherwise. @param {Inputs} inputs @returns {Record<string, object>} */
export function toldRoles(inputs) {
  const told = namedFiles(inputs).filter(
    ({ input, kind }) => kind !== null && input.role !== undefined && !FITTING[kind].includes(input.role),
  );
  return Object.fromEntries(told.map(({ name, kind }) => [name, { role: kind }]));
}

/** @param {FileRole | undefined} role @returns {InputKind | null} */
function boxOf(role) {
  if (role === undefined || FITTING.maps.includes(role)) return "maps";
  return role === "electrodes" ? "electrodes" : null;
}

/**
 * Puts what came in together in its places. What was there for the same purpose gives way; of several new ones for one
 * purpose the later stand beside, for the engine to ask about.
 * @param {Inputs} held
 * @param {Input[]} given
 */
export function placedInputs(held, given) {
  const now = { ...held };
  /** @type {Input[]} */
  const replaced = [];
  const fresh = () => [now.maps, now.electrodes, ...now.others].filter((one) => one !== null && given.includes(one));
  /** What goes takes along what says something about it alone. @param {InputKind} kind */
  const vacate = (kind) => {
    const before = now[kind];
    if (before === null) return;
    const gone = now.others.filter((one) => one.role && BELONGING[kind].includes(one.role) && !given.includes(one));
    replaced.push(before, ...gone);
    now.others = now.others.filter((one) => !gone.includes(one));
    now[kind] = null;
  };
  for (const input of given) {
    let box = boxOf(input.role);
    // A list of labels is a table of electrodes until one with positions comes.
    const wholly = given.some((one) => boxOf(one.role) === "electrodes" || one.role === "electrodes-and-maps");
    if (input.role === "labels" && now.electrodes === null && !wholly) box = "electrodes";
    if (box !== null && fresh().includes(now[box])) box = null;
    if (box === null) {
      const alike = now.others.filter((one) => one.role === input.role && input.role !== "unused" && !given.includes(one));
      replaced.push(...alike);
      now.others = [...now.others.filter((one) => !alike.includes(one)), input];
      continue;
    }
    if (box === "electrodes" && now.electrodes?.role === "labels" && input.role === "electrodes") {
      now.others = [...now.others, now.electrodes];
      now.electrodes = null;
    }
    vacate(box);
    if (input.role === "electrodes-and-maps" && !fresh().includes(now.electrodes)) vacate("electrodes");
    now[box] = input;
  }
  return { inputs: now, replaced };
}

/** Bytes of all contents, each counted once. @param {Inputs[]} steps */
export function heldBytes(steps) {
  const contents = new Set(steps.flatMap((inputs) => namedFiles(inputs).map(({ input }) => input.content)));
  return [...contents].reduce((sum, content) => sum + content.length, 0);
}
