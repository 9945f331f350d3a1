// Unpacks what comes as JSON on standard input, then damages it, and prints what came of it.
import { putTogether } from "../../www/engine/streams.js";
import { LOADING } from "../../www/text/loading.js";
import { unpackedLzma } from "../../www/text/lzma.js";
import { unpacked } from "../../www/text/packed.js";
import { readFileSync } from "node:fs";

const cases = JSON.parse(readFileSync(0, "utf8"));
let equal = 0;
const refused = { damaged: 0, cut: 0 };
const tried = { damaged: 0, cut: 0 };

/** The bytes below the letters, without unpacking them. */
function lettered(text) {
  const [length, letters] = text.split(" ");
  const alphabet = Array.from({ length: 94 }, (_, k) => String.fromCharCode(33 + k)).filter((one) => !'"<\\'.includes(one));
  let bits = "";
  for (let at = 0; at < letters.length; at += 2) {
    bits += (91 * alphabet.indexOf(letters[at]) + alphabet.indexOf(letters[at + 1])).toString(2).padStart(13, "0");
  }
  return Uint8Array.from({ length: Number(length) }, (_, at) => parseInt(bits.slice(8 * at, 8 * at + 8), 2));
}

function refuses(kind, bytes) {
  tried[kind]++;
  try {
    unpackedLzma(bytes);
  } catch (error) {
    if (error.message === LOADING.damaged) refused[kind]++;
  }
}

for (const { bytes, text } of cases) {
  if (Buffer.from(bytes).equals(unpacked(text))) equal++;
  const packed = lettered(text);
  for (let turn = 0; turn < 50; turn++) {
    const damaged = packed.slice();
    // The header is not guarded, and a handful of bytes hardly.
    damaged[13 + Math.floor((turn * (packed.length - 13)) / 50)] ^= 1 << turn % 8;
    if (bytes.length > 300) refuses("damaged", damaged);
    if (turn % 5 === 0) refuses("cut", packed.slice(0, Math.floor((turn * packed.length) / 50)));
  }
}

// A module by hand, which the build tool's tests take apart.
const names = "head tail opcodes variables read written offsets i64 calls branches tables bytes blocks other";
const opcodes = Array.from({ length: 256 }, (_, opcode) => `i32 ${opcode.toString(16)}`);
const streams = new Map([...names.split(" "), ...opcodes].map((name) => [name, []]));
const module = [];
const hex = (text) => text.split(" ").filter(Boolean).map((byte) => parseInt(byte, 16));
for (const line of readFileSync(new URL("../data/streams.tsv", import.meta.url), "utf8").split("\n").slice(1, -1)) {
  const [name, inside, apart] = line.split("\t");
  module.push(...hex(inside));
  streams.get(name)?.push(...hex(apart));
}
const lengths = Uint32Array.of(module.length, ...[...streams.values()].map(({ length }) => length));
const put = putTogether(Uint8Array.of(...new Uint8Array(lengths.buffer), ...[...streams.values()].flat()));
console.log(Buffer.from(put).equals(Buffer.from(module)) ? "a module put together" : `not the module: ${put}`);
console.log(
  `${equal} unpacked, ${refused.damaged} of ${tried.damaged} damaged ones refused, ${refused.cut} of ${tried.cut} cut off refused`,
);
