/** Which maps a person means by numbers and ranges of numbers. */

import { backwardsText, beyondText, noNumberText } from "../text/report.js";

/**
 * Indexes of maps as they were typed, each once and in the order of the table; or what is wrong about it.
 * @param {string} text
 * @param {number} count of maps
 * @returns {{ indexes: number[], fault: string }}
 */
export function typedMaps(text, count) {
  const chosen = new Set();
  for (const entry of text.split(/[,;\n]/).map((part) => part.trim()).filter((part) => part !== "")) {
    const [, from, to = from] = /^(\d{1,9})(?:\s*[-\u2013\u2212]\s*(\d{1,9}))?$/.exec(entry) ?? [];
    const [first, last] = [Number(from), Number(to)];
    if (from === undefined) return { indexes: [], fault: noNumberText(entry) };
    if (last < first) return { indexes: [], fault: backwardsText(entry) };
    if (first < 1 || last > count) return { indexes: [], fault: beyondText(entry, count) };
    for (let number = first; number <= last; number++) chosen.add(number - 1);
  }
  return { indexes: [...chosen].sort((a, b) => a - b), fault: "" };
}
