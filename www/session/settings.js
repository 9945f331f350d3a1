/** What becomes of settings: what is sent of them, and what of them outlives other inputs. */

/** The settings of a page without inputs. @type {PageSettings} */
export const FIRST_SETTINGS = {
  mapUnit: "relative",
  exclude: [],
  flip: [],
  polarity: "arbitrary",
  activationSd: [],
};

/**
 * Settings as the engine takes them: what has its default is left out.
 * @param {PageSettings} settings
 * @param {Record<string, object>} told what is said about files without being a setting of the user's
 */
export function sentSettings(settings, told) {
  const { exclude, flip, polarity, activationSd, ...sent } = settings;
  /** @type {EngineSettings} */
  const request = sent;
  /** @type {Record<string, FileSettings>} */
  let files = { ...settings.files };
  // A file may have any name, `__proto__` too.
  for (const [name, wishes] of Object.entries(told)) files = { ...files, [name]: { ...wishes, ...files[name] } };
  if (Object.keys(files).length > 0) request.files = files;
  if (exclude.length > 0) request.exclude = exclude;
  if (flip.length > 0) request.flip = flip;
  if (polarity !== "arbitrary") request.polarity = polarity;
  if (activationSd.some((value) => value !== null)) request.activationSd = activationSd;
  return request;
}

/** Of a text; null of bytes. @param {Input} input */
export function firstLine({ content }) {
  return typeof content === "string" ? content.trimStart().split("\n", 1)[0] : null;
}

/**
 * Whether a table takes the place of another one, rather than being the same one typed on: under another name, or
 * with another first line, which tells how many columns there are.
 * @param {Input | null} before
 * @param {Input | null} now
 */
export function isOtherTable(before, now) {
  if (before === null || now === null) return before !== now;
  return before.name !== now.name || firstLine(before) !== firstLine(now);
}

/** Settings that belong to one table and say nothing about another. @type {Record<InputKind, (keyof PageSettings)[]>} */
export const BOUND = {
  maps: [
    "exclude",
    "interpolated",
    "flip",
    "activationSd",
    "laplacian",
    "orientation",
    "mapsAre",
    "columnsAre",
    "times",
    "baseline",
    "noise",
  ],
  electrodes: ["exclude", "interpolated", "axes", "mirror", "unusualHead", "head", "units", "columns", "angles"],
};

/**
 * What of the settings outlives another table: of the head its shells, and what belongs to no table.
 * @param {PageSettings} settings
 * @param {InputKind[]} kinds of the tables that are others now
 * @returns {PageSettings}
 */
export function settingsForOther(settings, kinds) {
  const bound = kinds.flatMap((kind) => BOUND[kind]);
  const kept = Object.fromEntries(
    Object.entries(settings).filter(([key]) => !bound.includes(/** @type {keyof PageSettings} */ (key))),
  );
  const shells = settings.head?.shells;
  const head = bound.includes("head") && shells !== undefined ? { head: { shells } } : {};
  return { ...FIRST_SETTINGS, ...kept, ...head };
}

/** Settings of files that are there. @param {PageSettings} settings @param {string[]} names @returns {PageSettings} */
export function settingsOfFiles({ files, ...settings }, names) {
  const kept = Object.entries(files ?? {}).filter(([name]) =>
    names.some((known) => name === known || name.startsWith(`${known}/`)),
  );
  return kept.length === 0 ? settings : { ...settings, files: Object.fromEntries(kept) };
}

/** Names of the settings in which two differ. @param {PageSettings} before @param {PageSettings} now */
export function differingSettings(before, now) {
  /** @param {PageSettings} settings */
  const parts = (settings) => /** @type {Record<string, unknown>} */ ({ ...settings });
  return Object.keys({ ...before, ...now }).filter(
    (key) => JSON.stringify(parts(before)[key]) !== JSON.stringify(parts(now)[key]),
  );
}

/**
 * A copy with another value at a place; undefined takes it out, and what is empty then too.
 * @param {any} settings
 * @param {string[]} path
 * @param {unknown} value
 * @returns {any}
 */
export function settingsWith(settings, [key, ...rest], value) {
  const { [key]: held, ...others } = settings ?? {};
  const next = rest.length === 0 ? value : settingsWith(held, rest, value);
  const empty = next === undefined || (rest.length > 0 && Object.keys(next).length === 0);
  return empty ? others : { ...settings, [key]: next };
}

/** @param {number[]} flip @param {number} index @returns {number[]} */
export function withTurned(flip, index) {
  const others = flip.filter((one) => one !== index);
  return others.length < flip.length ? others : [...others, index].sort((a, b) => a - b);
}

/** @param {(number | null)[]} values @param {number} index @param {number | null} value @returns {(number | null)[]} */
export function withValueAt(values, index, value) {
  const next = [...values];
  while (next.length < index) next.push(null);
  next[index] = value;
  while (next.length > 0 && next.at(-1) === null) next.pop();
  return next;
}
