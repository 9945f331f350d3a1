/** Messages of the page around: what they may be. Nothing in them is trusted. */

import { MOST_BYTES } from "../intake/files.js";

export const PROTOCOL = 1;
export const MOST_FILES = 200;
const MOST_OF_A_NAME = 255;
const MOST_LABELS = 1000;

/**
 * @typedef {{ kind: "data", id: unknown, files: File[], settings: Partial<PageSettings> } | { kind: "report-wanted", id: unknown }} Wish
 * @typedef {{ kind: "refused", id: unknown, code: string, where: string }} Refusal
 */

/** @param {unknown} value @returns {value is Record<string, unknown>} */
const isRecord = (value) => value !== null && typeof value === "object" && Object.getPrototypeOf(value) === Object.prototype;

/** @param {unknown} value @returns {value is string} */
const isShort = (value) => typeof value === "string" && value.length <= MOST_OF_A_NAME;

/** @type {Record<string, (value: any) => boolean>} */
const SETTINGS = {
  mapUnit: (value) => ["relative", "uV", "V"].includes(value),
  polarity: (value) => ["arbitrary", "declared"].includes(value),
  exclude: (value) => Array.isArray(value) && value.length <= MOST_LABELS && value.every(isShort),
};

/** @param {unknown} content */
function sizeOf(content) {
  if (typeof content === "string") return content.length;
  if (content instanceof ArrayBuffer || (ArrayBuffer.isView(content) && content.buffer instanceof ArrayBuffer)) return content.byteLength;
  return null;
}

/** @param {unknown} message @returns {Wish | Refusal} */
export function readMessage(message) {
  /** @type {unknown} */
  let id = null;
  /** @param {string} code @param {string} where @returns {Refusal} */
  const refused = (code, where) => ({ kind: "refused", id, code, where });

  if (!isRecord(message)) return refused("message-malformed", "message");
  const given = message.id ?? null;
  if (given !== null && !isShort(given) && !Number.isSafeInteger(given)) return refused("message-malformed", "id");
  id = given;
  if (message.inward !== PROTOCOL) return refused("version-unknown", "inward");
  const { kind, files, settings = {} } = message;
  if (kind === "report-wanted") return { kind, id };
  if (kind !== "data") return refused("kind-unknown", "kind");

  if (!Array.isArray(files) || files.length === 0) return refused("message-malformed", "files");
  if (files.length > MOST_FILES) return refused("data-large", "files");
  let bytes = 0;
  for (const [at, file] of files.entries()) {
    if (!isRecord(file) || !isShort(file.name) || file.name === "") return refused("message-malformed", `files[${at}].name`);
    const size = sizeOf(file.content);
    if (size === null) return refused("message-malformed", `files[${at}].content`);
    bytes += size;
    if (bytes > MOST_BYTES) return refused("data-large", `files[${at}].content`);
  }
  if (!isRecord(settings)) return refused("message-malformed", "settings");
  for (const [name, value] of Object.entries(settings)) {
    if (!Object.hasOwn(SETTINGS, name)) return refused("setting-unknown", `settings.${name.slice(0, MOST_OF_A_NAME)}`);
    if (!SETTINGS[name](value)) return refused("message-malformed", `settings.${name}`);
  }
  return { kind, id, files: files.map(({ name, content }) => new File([content], name)), settings };
}
