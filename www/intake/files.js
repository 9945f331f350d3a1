/** Files and pasted text become inputs. Bytes stay as they are; the engine decides on their encoding. */

import { kindOf } from "./kind.js";

const LOOK_AT_BYTES = 1 << 17;
const SHOW_CHARACTERS = 1 << 18;

/** @param {InwardContent} content */
export function contentKind(content) {
  return kindOf(typeof content === "string" ? content : new TextDecoder().decode(content.subarray(0, LOOK_AT_BYTES)));
}

/** What a text field shows of an input; null when it is too long for one. @param {Input} input */
export function shownText(input) {
  if (input.content.length > SHOW_CHARACTERS) return null;
  return typeof input.content === "string" ? input.content : new TextDecoder().decode(input.content);
}

/** @param {File} file @returns {Promise<Input>} */
export async function inputOfFile(file) {
  try {
    return { name: file.name, content: new Uint8Array(await file.arrayBuffer()) };
  } catch (error) {
    throw Object.assign(new Error(""), { code: "file-unreadable", details: String(error) });
  }
}

/** Sorts what came in together by its content. @param {Input[]} inputs */
export function sortInputs(inputs) {
  /** @type {Partial<Record<InputKind, Input>>} */
  const sorted = {};
  for (const input of inputs) {
    const kind = contentKind(input.content);
    if (sorted[kind] !== undefined) throw Object.assign(new Error(""), { code: "inputs-same-kind" });
    sorted[kind] = input;
  }
  return sorted;
}
