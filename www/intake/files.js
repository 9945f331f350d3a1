/** Files and pasted text become inputs. Bytes stay as they are; the engine decides on their encoding. */

import { harmless, shortName } from "../text/figures.js";

const SHOW_CHARACTERS = 1 << 18;
/** The engine reads no more; a larger file need not be loaded to be refused. */
export const MOST_BYTES = 64 << 20;

/** Bytes that are looked at to tell text from other content. */
const SAMPLE_BYTES = 4096;

/** The encoding of bytes as far as showing them goes; null for what is no text. @param {Uint8Array} bytes */
function shownEncoding(bytes) {
  const [first, second] = bytes;
  if (first === 0xff && second === 0xfe) return "utf-16le";
  if (first === 0xfe && second === 0xff) return "utf-16be";
  return bytes.subarray(0, SAMPLE_BYTES).includes(0) ? null : "utf-8";
}

/** What a text field shows of an input; null when it is too long for one, or no text. @param {Input} input */
export function shownText({ content }) {
  if (content.length > SHOW_CHARACTERS) return null;
  if (typeof content === "string") return content;
  const encoding = shownEncoding(content);
  return encoding === null ? null : new TextDecoder(encoding).decode(content);
}

/** @param {File} file @returns {Promise<Input>} */
export async function inputOfFile(file) {
  const name = harmless(file.name);
  if (file.size > MOST_BYTES) throw fileFault("file-large", name, `${file.size} bytes`);
  try {
    return { name, content: new Uint8Array(await file.arrayBuffer()) };
  } catch (error) {
    throw fileFault("file-unreadable", name, String(error));
  }
}

/** @param {string} code @param {string} name @param {string} details */
function fileFault(code, name, details) {
  return Object.assign(new Error(""), { code, details, where: { file: shortName(name) } });
}
