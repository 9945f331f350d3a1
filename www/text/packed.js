/** What the page carries packed: LZMA, then 13 bits in two of 91 characters. */

import { unpackedLzma } from "./lzma.js";

/** @param {string} text the number of bytes, a blank, and the characters @returns what was packed */
export function unpacked(text) {
  const [length, letters] = text.trim().split(" ");
  const bytes = new Uint8Array(Number(length));
  // Printable characters but for the quote, the opening angle bracket and the backslash.
  const digit = (/** @type {number} */ code) => code - 33 - +(code > 34) - +(code > 60) - +(code > 92);
  for (let from = 0, to = 0, bits = 0, count = 0; to < bytes.length; from += 2) {
    bits = (bits << 13) | (91 * digit(letters.charCodeAt(from)) + digit(letters.charCodeAt(from + 1)));
    for (count += 13; count >= 8; count -= 8) bytes[to++] = bits >> (count - 8);
    bits &= 255;
  }
  return unpackedLzma(bytes);
}

/** @param {string} text @returns what was packed, where that is a text */
export function unpackedText(text) {
  return new TextDecoder().decode(unpacked(text));
}
