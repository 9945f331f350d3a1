/**
 * Unpacks LZMA files (I. Pavlov, LZMA specification, 2015, public domain), of a stated length and without a mark at
 * the end: bits whose odds are learned, in a range coder, tell bytes and copies of what came before.
 */

import { LOADING } from "./loading.js";

/** Places of the odds: one for each state and position, or for each state. */
const MATCH = 0;
const REPEAT = 192;
const FIRST_REPEAT = 204;
const SECOND_REPEAT = 216;
const THIRD_REPEAT = 228;
const LONG_REPEAT = 240;
/** Of distances: their sizes by the length of the copy, their lowest four bits, and the lower bits of short ones. */
const SLOT = 432;
const LOWEST = 688;
const NEAR = 704;
/** Of lengths, for new distances and for repeated ones: two choices, then short, middle and long ones. */
const LENGTH = 832;
const REPEATED_LENGTH = 1346;
const LITERAL = 1860;

/** A header that promises more is none of ours. */
const MOST_CARRIED = 2 ** 26;

/** @param {Uint8Array} packed @returns {Uint8Array<ArrayBuffer>} */
export function unpackedLzma(packed) {
  const header = new DataView(packed.buffer, packed.byteOffset, packed.byteLength);
  const short = packed.length < 18;
  const size = short ? 0 : header.getUint32(5, true) + 2 ** 32 * header.getUint32(9, true);
  const context = packed[0] % 9;
  const position = Math.floor(packed[0] / 9) % 5;
  const places = Math.floor(packed[0] / 45);
  if (short || packed[0] > 224 || packed[13] !== 0 || size > MOST_CARRIED) throw new Error(LOADING.damaged);

  const out = new Uint8Array(size);
  const odds = new Uint16Array(LITERAL + (768 << (context + position))).fill(1024);
  let at = 18;
  /** Range and code: in an array, since engines box a captured variable that does not fit into 31 bits. */
  const coder = new Uint32Array([0xffffffff, header.getUint32(14)]);

  function fill() {
    coder[0] <<= 8;
    coder[1] = (coder[1] << 8) | packed[at++];
  }

  /** @param {number} place of the odds of a zero */
  function bit(place) {
    const odd = odds[place];
    const bound = Math.imul(coder[0] >>> 11, odd) >>> 0;
    const one = coder[1] < bound ? 0 : 1;
    const range = one === 0 ? bound : coder[0] - bound;
    if (one === 1) coder[1] -= bound;
    odds[place] = one === 0 ? odd + ((2048 - odd) >> 5) : odd - (odd >> 5);
    coder[0] = range;
    if (range < 2 ** 24) fill();
    return one;
  }

  /** A number of so many bits, the highest first. @param {number} base @param {number} bits */
  function tree(base, bits) {
    let node = 1;
    for (let k = 0; k < bits; k++) node = 2 * node + bit(base + node);
    return node - (1 << bits);
  }

  /** The same, the lowest first. @param {number} base @param {number} bits */
  function backwards(base, bits) {
    let value = 0;
    for (let node = 1, k = 0; k < bits; k++) {
      const one = bit(base + node);
      node = 2 * node + one;
      value |= one << k;
    }
    return value;
  }

  /** Bits as likely as not. @param {number} bits */
  function even(bits) {
    let value = 0;
    for (let k = 0; k < bits; k++) {
      coder[0] >>>= 1;
      const one = coder[1] < coder[0] ? 0 : 1;
      if (one === 1) coder[1] -= coder[0];
      value = 2 * value + one;
      if (coder[0] < 2 ** 24) fill();
    }
    return value;
  }

  /** @param {number} base @param {number} place */
  function lengthOf(base, place) {
    if (bit(base) === 0) return 2 + tree(base + 2 + 8 * place, 3);
    if (bit(base + 1) === 0) return 10 + tree(base + 130 + 8 * place, 3);
    return 18 + tree(base + 258, 8);
  }

  /** @param {number} length of the copy */
  function distanceOf(length) {
    const slot = tree(SLOT + 64 * Math.min(length - 2, 3), 6);
    if (slot < 4) return slot;
    const bits = (slot >> 1) - 1;
    const base = (2 + (slot & 1)) * 2 ** bits;
    if (slot < 14) return base + backwards(NEAR + base - slot, bits);
    return base + 16 * even(bits - 4) + backwards(LOWEST, 4);
  }

  /** What came last: below 7 a byte that stands for itself, from 7 on a copy. */
  let state = 0;
  /** The last four distances, less one, the latest first. */
  let [first, second, third, fourth] = [0, 0, 0, 0];
  for (let done = 0; done < size;) {
    if (at > packed.length) throw new Error(LOADING.damaged);
    const place = done & ((1 << places) - 1);
    if (bit(MATCH + 16 * state + place) === 0) {
      const before = done === 0 ? 0 : out[done - 1];
      const group = ((done & ((1 << position) - 1)) << context) + (before >> (8 - context));
      const base = LITERAL + 768 * group;
      let symbol = 1;
      // After a copy, the byte that would have continued it tells much of the next.
      if (state >= 7) {
        for (let guess = out[done - first - 1]; symbol < 256; guess <<= 1) {
          const guessed = (guess >> 7) & 1;
          const one = bit(base + 256 * (1 + guessed) + symbol);
          symbol = 2 * symbol + one;
          if (one !== guessed) break;
        }
      }
      while (symbol < 256) symbol = 2 * symbol + bit(base + symbol);
      out[done++] = symbol;
      state = state < 4 ? 0 : state < 10 ? state - 3 : state - 6;
      continue;
    }
    let length = 1;
    if (bit(REPEAT + state) === 0) {
      [fourth, third, second] = [third, second, first];
      length = lengthOf(LENGTH, place);
      first = distanceOf(length);
      state = state < 7 ? 7 : 10;
    } else {
      let single = false;
      if (bit(FIRST_REPEAT + state) === 0) {
        single = bit(LONG_REPEAT + 16 * state + place) === 0;
      } else if (bit(SECOND_REPEAT + state) === 0) {
        [first, second] = [second, first];
      } else if (bit(THIRD_REPEAT + state) === 0) {
        [first, second, third] = [third, first, second];
      } else {
        [first, second, third, fourth] = [fourth, first, second, third];
      }
      if (!single) length = lengthOf(REPEATED_LENGTH, place);
      state = state < 7 ? (single ? 9 : 8) : 11;
    }
    if (first >= done || length > size - done) throw new Error(LOADING.damaged);
    for (const end = done + length; done < end; done++) out[done] = out[done - first - 1];
  }
  if (at !== packed.length || coder[1] !== 0) throw new Error(LOADING.damaged);
  return out;
}
