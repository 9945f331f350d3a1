/** Files and pasted text become inputs. Bytes stay as they are; the engine decides on their encoding. */

import { harmless } from "../text/figures.js";

const SHOW_CHARACTERS = 1 << 18;
/** The engine reads no more; a larger file need not be loaded to be refused. */
const MOST_BYTES = 64 << 20;

/** What a text field shows of an input; null when it is too long for one. @param {Input} input */
export function shownText(input) {
  if (input.content.length > SHOW_CHARACTERS) return null;
  return typeof input.content === "string" ? input.content : new TextDecoder().decode(input.content);
}

/** @param {File} file @returns {Promise<Input>} */
export async function inputOfFile(file) {
  if (file.size > MOST_BYTES) throw fileFault("file-large", `${file.name}: ${file.size} bytes`);
  try {
    return { name: harmless(file.name), content: new Uint8Array(await file.arrayBuffer()) };
  } catch (error) {
    throw fileFault("file-unreadable", `${file.name}: ${error}`);
  }
}

/** @param {string} code @param {string} details */
function fileFault(code, details) {
  return Object.assign(new Error(""), { code, details });
}

/** Puts what came in together in its places; one of a kind. @param {Input[]} inputs @param {InputKind[]} kinds */
export function sortInputs(inputs, kinds) {
  if (new Set(kinds).size < kinds.length) throw Object.assign(new Error(""), { code: "inputs-same-kind" });
  return Object.fromEntries(inputs.map((input, at) => [kinds[at], input]));
}
