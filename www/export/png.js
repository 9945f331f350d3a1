/** How large a PNG is in the world: a chunk of its resolution behind the header. */

/** Bytes before the place of the chunk: the signature and the header's own chunk, which comes first in every PNG. */
const HEADER_END = 33;
const INCHES_A_METRE = 1 / 0.0254;

/** The sum of a chunk, as the format has it. @param {Uint8Array} bytes */
function chunkSum(bytes) {
  let sum = -1;
  for (const byte of bytes) {
    sum ^= byte;
    for (let bit = 0; bit < 8; bit++) sum = (sum >>> 1) ^ (sum & 1 ? 0xedb88320 : 0);
  }
  return ~sum >>> 0;
}

/** @param {Blob} png @param {number} perInch */
export function withResolution(png, perInch) {
  const chunk = new DataView(new ArrayBuffer(21));
  const perMetre = Math.round(perInch * INCHES_A_METRE);
  [9, 0x70485973, perMetre, perMetre].forEach((value, at) => chunk.setUint32(4 * at, value));
  chunk.setUint8(16, 1);
  chunk.setUint32(17, chunkSum(new Uint8Array(chunk.buffer, 4, 13)));
  return new Blob([png.slice(0, HEADER_END), chunk, png.slice(HEADER_END)], { type: png.type });
}
