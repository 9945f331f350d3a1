/**
 * Puts a WebAssembly module together from streams of its like parts, as `crate/xtask/src/streams.rs` takes it apart:
 * they pack better than the module (opcodes and their operands: WebAssembly specification 2.0, §5.4).
 */

import { LOADING } from "../text/loading.js";

/** The streams: what stands before the functions and after them, then parts of functions. */
const HEAD = 0;
const TAIL = 1;
const OPCODES = 2;
const VARIABLES = 3;
const READ = 4;
const WRITTEN = 5;
const OFFSETS = 6;
const I64 = 7;
const CALLS = 8;
const BRANCHES = 9;
const TABLES = 10;
const BYTES = 11;
const BLOCKS = 12;
const OTHER = 13;
/** Constants of 32 bits before each opcode. */
const I32 = 14;
const COUNT = I32 + 256;
/** Base-2 logarithms of the bytes that 0x28 to 0x3e load or store, and what has the prefix 0xfd: 0 to 11, 84 to 93. */
const NATURAL = "23230011001122232301012";
const NATURAL_WIDE = "433333301234";
const NATURAL_LANE = "0123012323";
/** Opcodes with one number that is seldom needed. */
const ALONE = [0x23, 0x24, 0x25, 0x26, 0x3f, 0x40, 0xd0, 0xd2];

/** @param {Uint8Array<ArrayBuffer>} bytes lengths of the module and of each stream, and the streams */
export function putTogether(bytes) {
  const [size, ...lengths] = new Uint32Array(bytes.buffer, 0, COUNT + 1);
  const out = new Uint8Array(size);
  let to = 0;
  let end = 4 * (COUNT + 1);
  const places = lengths.map((length) => (end += length) - length);

  /** @param {number} stream @param {number} count */
  function copy(stream, count) {
    for (const last = to + count; to < last; to++) out[to] = bytes[places[stream]++];
  }

  /** A number in groups of seven bits. @param {number} stream */
  function next(stream) {
    let value = 0;
    for (let shift = 0, byte = 128; byte > 127; shift += 7) {
      byte = bytes[places[stream]++];
      value |= (byte & 127) << shift;
    }
    return value;
  }

  /** The same, into the module. @param {number} stream */
  function number(stream) {
    const from = places[stream];
    const value = next(stream);
    for (let at = from; at < places[stream]; at++) out[to++] = bytes[at];
    return value;
  }

  /** @param {number} value */
  function write(value) {
    for (; value > 127; value >>= 7) out[to++] = value | 128;
    out[to++] = value;
  }

  /** @param {string} natural @param {number} which */
  function memory(natural, which) {
    out[to++] = Number(natural[which]);
    number(OFFSETS);
  }

  /** Locals of a function, those used last first. @type {number[]} */
  let recent = [];
  /** @param {number} stream of ranks among them */
  function local(stream) {
    const rank = next(stream);
    while (recent.length <= rank) recent.push(recent.length);
    const [found] = recent.splice(rank, 1);
    recent.unshift(found);
    write(found);
  }

  /** @returns by how much the depth of blocks changes */
  function instruction() {
    copy(OPCODES, 1);
    const opcode = out[to - 1];
    if (opcode === 0x0b) return -1;
    if (opcode === 0x20) local(READ);
    else if (opcode === 0x21 || opcode === 0x22) local(WRITTEN);
    else if (opcode >= 0x28 && opcode <= 0x3e) memory(NATURAL, opcode - 0x28);
    else if (opcode === 0x41) number(I32 + bytes[places[OPCODES]]);
    else if (opcode === 0x42) number(I64);
    else if (opcode === 0x43 || opcode === 0x44) copy(BYTES, opcode === 0x43 ? 4 : 8);
    else if (opcode === 0x10) number(CALLS);
    else if (opcode === 0x0c || opcode === 0x0d) number(BRANCHES);
    else if (opcode === 0x0e) for (let left = number(TABLES); left >= 0; left--) number(TABLES);
    else if (opcode === 0xfc) {
      const which = number(OPCODES);
      if (which > 7) number(OTHER);
      if (which > 7 && which < 16 && which % 2 === 0) number(OTHER);
    } else if (opcode === 0xfd) {
      const which = number(OPCODES);
      if (which < 12) memory(NATURAL_WIDE, which);
      else if (which < 14) copy(BYTES, 16);
      else if (which > 20 && which < 35) copy(BYTES, 1);
      else if (which > 83 && which < 94) {
        memory(NATURAL_LANE, which - 84);
        if (which < 92) copy(BYTES, 1);
      }
    } else if (ALONE.includes(opcode)) number(OTHER);
    else if (opcode === 0x11) for (let left = 2; left > 0; left--) number(OTHER);
    else if (opcode >= 0x02 && opcode <= 0x04) {
      number(BLOCKS);
      return 1;
    }
    return 0;
  }

  copy(HEAD, lengths[HEAD]);
  for (let left = number(OPCODES); left > 0; left--) {
    const from = to;
    for (let groups = number(VARIABLES); groups > 0; groups--) {
      number(VARIABLES);
      number(VARIABLES);
    }
    recent = [];
    for (let depth = 1; depth > 0; depth += instruction()) if (to > size) throw new Error(LOADING.damaged);
    // Its size stands before it.
    const body = out.slice(from, to);
    to = from;
    write(body.length);
    out.set(body, to);
    to += body.length;
  }
  copy(TAIL, lengths[TAIL]);
  return out;
}
