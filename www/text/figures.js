/** The few numbers the page writes by itself; all others come as text from the engine. */

const MINUS = "\u2212";
const NO_BREAK = "\u00a0";

/** For the eye: true minus signs, and no line break between a number and its unit. @param {string} text */
export function typeset(text) {
  return text
    .replace(/(^|[\s(])-(?=\d)/g, `$1${MINUS}`)
    .replace(/(\d) (?=%|mm\b|cm\b|S\/m|nAm|µV|V\b)/g, `$1${NO_BREAK}`);
}

/** A fraction as a percentage with one decimal. @param {number} fraction */
export function percentText(fraction) {
  return `${(100 * fraction).toFixed(1)}${NO_BREAK}%`;
}

/** @param {number} factor */
export function stretchText(factor) {
  return `×${NO_BREAK}${Number(factor.toPrecision(2))}`;
}
