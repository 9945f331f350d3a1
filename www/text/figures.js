/** The few numbers the page writes by itself; all others come as text from the engine. */

const MINUS = "\u2212";
const NARROW_SPACE = "\u202f";

/** For the eye: true minus signs, and no line break between a number and its unit. @param {string} text */
export function typeset(text) {
  return text.replace(/(^|[\s(])-(?=\d)/g, `$1${MINUS}`).replace(/(\d) (?=%|mm\b|cm\b|S\/m|nAm|µV|V\b)/g, "$1\u00a0");
}

/** A fraction as a percentage with one decimal. @param {number} fraction */
export function percentText(fraction) {
  return `${(100 * fraction).toFixed(1)}${NARROW_SPACE}%`;
}

/** @param {number} factor */
export function stretchText(factor) {
  return `×${NARROW_SPACE}${Number(factor.toPrecision(2))}`;
}

