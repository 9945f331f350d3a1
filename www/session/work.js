/**
 * Saved work: everything that was put in and chosen as one JSON text, from which the same session comes back digit by
 * digit. Nothing computed is in it. README has the schema; files of every version stay readable:
 * a later one adds a step to `MIGRATIONS` and a file to the tests.
 */

import { nextId, emptyDecomposition } from "./decompositions.js";
import { namedFiles } from "./inputs.js";
import { outwardNames } from "./outward.js";
import { FIRST_SETTINGS } from "./settings.js";

const FORMAT = "inward-work";

/**
 * Each makes a text of the next version of one of its own; the first is for version 1.
 * @type {((work: any) => any)[]}
 */
const MIGRATIONS = [];
const VERSION = MIGRATIONS.length + 1;

/** The head of a file says what it is. */
const SNIFFED = 4096;

/** Formats of the page's own that say what came out, not what went in. */
const OTHERS = ["inward-report", "inward-comparison", "inward-table"];

/** @typedef {(content: InwardContent) => Promise<string | null>} Digest */
/** @typedef {{ decompositions: Decomposition[], current: number, threshold: number, explained: number[] }} Work */

/** The format that a JSON text of the page's own names at its head. @param {InwardContent} content */
export function ownFormat(content) {
  const head = typeof content === "string" ? content.slice(0, SNIFFED) : new TextDecoder().decode(content.subarray(0, SNIFFED));
  const format = /^\s*\{\s*"format"\s*:\s*"(inward-[a-z]+)"/.exec(head)?.[1] ?? "";
  return [FORMAT, ...OTHERS].includes(format) ? format : null;
}

/** @param {Uint8Array} bytes */
function base64Of(bytes) {
  let text = "";
  // More arguments at once are too many for a call.
  for (let at = 0; at < bytes.length; at += 0x8000) text += String.fromCharCode(...bytes.subarray(at, at + 0x8000));
  return btoa(text);
}

/** Text stays readable: as it was typed, or as bytes of UTF-8, mark and all. @param {InwardContent} content */
function written(content) {
  if (typeof content === "string") return { kind: "text", data: content };
  try {
    return { kind: "utf-8", data: new TextDecoder("utf-8", { fatal: true, ignoreBOM: true }).decode(content) };
  } catch {
    return { kind: "base64", data: base64Of(content) };
  }
}

/** @param {{ kind: string, data: string }} one @returns {InwardContent} */
function unwritten({ kind, data }) {
  if (kind === "text") return data;
  return kind === "utf-8" ? new TextEncoder().encode(data) : Uint8Array.from(atob(data), (letter) => letter.charCodeAt(0));
}

/**
 * The text in parts, so that tables of many megabytes never become one string.
 * @param {SessionState} state
 * @param {number[]} explained maps of the current answer whose other explanations were looked for
 * @param {Digest} digest
 */
export async function workParts(state, explained, digest) {
  const outward = outwardNames(state);
  /** @type {Input[]} */
  const inputs = [];
  /** @type {object[]} */
  const files = [];
  const decompositions = state.decompositions.map(({ id, inputs: own, settings, typed, information, example, answer, begin }) => {
    const names = outward.files.get(id) ?? {};
    /** @type {Map<Input, number>} */
    const places = new Map();
    for (const { name, input } of namedFiles(own)) {
      if (!inputs.includes(input)) {
        inputs.push(input);
        files.push({ name: input.name === "" ? "" : (names[name] ?? input.name), role: input.role ?? null, content: inputs.length - 1 });
      }
      places.set(input, inputs.indexOf(input));
    }
    const place = (/** @type {Input | null} */ input) => (input === null ? null : places.get(input));
    const said = Object.entries(settings.files ?? {}).map(([name, wishes]) => [outwardOf(name, names), wishes]);
    return {
      ...outward.decompositions.get(id),
      typed,
      information,
      maps: place(own.maps),
      electrodes: place(own.electrodes),
      others: own.others.map(place),
      settings: { ...settings, ...(settings.files === undefined ? {} : { files: Object.fromEntries(said) }) },
      example,
      chosen: answer?.chosen ?? begin,
    };
  });
  const contents = [];
  for (const { content } of inputs) contents.push({ sha256: await digest(content), ...written(content) });
  const { program, threshold, namesShown } = state;
  const current = state.decompositions.findIndex(({ id }) => id === state.current);
  const plain = { format: FORMAT, version: VERSION, program, names: namesShown ? "given" : "hidden", current, threshold, explained };
  const lines = Object.entries(plain).map(([key, value]) => `  "${key}": ${JSON.stringify(value)},\n`);
  /** @param {string} key @param {object[]} list @param {string} end */
  const listed = (key, list, end) => [`  "${key}": [\n`, ...list.flatMap((one, at) => [at === 0 ? "    " : ",\n    ", JSON.stringify(one)]), `\n  ]${end}\n`];
  return ["{\n", ...lines, ...listed("decompositions", decompositions, ","), ...listed("files", files, ","), ...listed("contents", contents, ""), "}\n"];
}

/** A file's outward name, or that of a file within it. @param {string} name @param {Record<string, string>} names */
function outwardOf(name, names) {
  const outer = Object.keys(names).find((file) => name === file || name.startsWith(`${file}/`));
  return outer === undefined ? name : names[outer] + name.slice(outer.length);
}

/** @param {string} code @param {string} details */
function workFault(code, details) {
  return Object.assign(new Error(""), { code, details });
}

/** @param {boolean} holds @param {string} what */
function expect(holds, what) {
  if (!holds) throw workFault("work-damaged", what);
}

const isText = (/** @type {unknown} */ value) => typeof value === "string";
const isNumber = (/** @type {unknown} */ value) => typeof value === "number" && Number.isFinite(value);
const isWhole = (/** @type {any} */ value) => Number.isInteger(value) && value >= 0;
const isObject = (/** @type {unknown} */ value) => typeof value === "object" && value !== null && !Array.isArray(value);
/** @param {unknown} value @param {(one: any) => boolean} is */
const isList = (value, is) => Array.isArray(value) && value.every(is);

/** What views rely on; all else of the settings is checked by the engine. @param {any} settings */
function hasPageSettings(settings) {
  return (
    isObject(settings) &&
    ["relative", "uV", "V"].includes(settings.mapUnit) &&
    ["arbitrary", "declared"].includes(settings.polarity) &&
    isList(settings.exclude, isText) &&
    isList(settings.flip, isWhole) &&
    isList(settings.activationSd, (one) => one === null || isNumber(one)) &&
    ["files", "head"].every((key) => settings[key] === undefined || isObject(settings[key])) &&
    isList(settings.head?.shells ?? [], (one) => isObject(one) && isText(one.tissue) && isNumber(one.ratio) && isNumber(one.conductivity))
  );
}

/** @param {string} text */
function parsed(text) {
  try {
    return JSON.parse(text);
  } catch (error) {
    throw workFault("work-damaged", String(error));
  }
}

/**
 * What a saved text restores. Whatever is wrong with it is found before anything changes.
 * @param {InwardContent} content
 * @param {Digest} digest
 * @returns {Promise<Work>}
 */
export async function readWork(content, digest) {
  if (ownFormat(content) !== FORMAT) throw workFault("work-other", ownFormat(content) ?? "");
  let work = parsed(typeof content === "string" ? content : new TextDecoder().decode(content));
  const { version } = work;
  expect(isWhole(version) && version >= 1, `version: ${JSON.stringify(version)}`);
  if (version > VERSION) throw workFault("work-newer", `version ${version}, saved by ${work.program?.name} ${work.program?.version}`);
  for (const migrate of MIGRATIONS.slice(version - 1)) work = migrate(work);

  for (const key of ["contents", "files", "decompositions"]) expect(isList(work[key], isObject), `${key} is no list of objects`);
  /** @type {InwardContent[]} */
  const contents = [];
  for (const [at, one] of work.contents.entries()) {
    const where = `contents[${at}]`;
    expect(["text", "utf-8", "base64"].includes(one.kind) && isText(one.data), where);
    try {
      contents.push(unwritten(one));
    } catch (error) {
      throw workFault("work-damaged", `${where}: ${error}`);
    }
    expect((await digest(contents[at])) === one.sha256, `${where} has not the SHA-256 ${one.sha256}`);
  }
  /** @type {Input[]} */
  const inputs = work.files.map((/** @type {any} */ { name, role, content: place }, /** @type {number} */ at) => {
    expect(isText(name) && (role === null || isText(role)) && isWhole(place) && place < contents.length, `files[${at}]`);
    return { name, content: contents[place], ...(role === null ? {} : { role }) };
  });
  /** @type {Decomposition[]} */
  const decompositions = [];
  for (const [at, one] of work.decompositions.entries()) {
    const where = `decompositions[${at}]`;
    const isPlace = (/** @type {any} */ place) => isWhole(place) && place < inputs.length;
    expect(["maps", "electrodes"].every((key) => one[key] === null || isPlace(one[key])) && isList(one.others, isPlace), `${where}: files`);
    expect(isText(one.name) && isText(one.subject) && typeof one.typed === "boolean", `${where}: names`);
    expect(one.information === null || isNumber(one.information), `${where}.information`);
    expect(isWhole(one.chosen), `${where}.chosen`);
    expect(one.example === null || (isObject(one.example) && isText(one.example.name) && isText(one.example.title)), `${where}.example`);
    expect(hasPageSettings(one.settings), `${where}.settings`);
    const { name, subject, typed, information, settings, example, chosen } = one;
    const box = (/** @type {number | null} */ place) => (place === null ? null : inputs[place]);
    decompositions.push({
      ...emptyDecomposition(nextId(decompositions)),
      ...{ name, subject, typed, information, example, begin: chosen },
      inputs: { maps: box(one.maps), electrodes: box(one.electrodes), others: one.others.map(box) },
      settings: { ...FIRST_SETTINGS, ...settings },
    });
  }
  const current = decompositions[work.current];
  expect(current !== undefined, "current");
  expect(isNumber(work.threshold) && work.threshold > 0 && work.threshold <= 1, "threshold");
  expect(isList(work.explained, isWhole), "explained");
  return { decompositions, current: current.id, threshold: work.threshold, explained: work.explained };
}
