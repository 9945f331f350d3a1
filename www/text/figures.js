/** The few numbers the page writes by itself; all others come as text from the engine. */

const MINUS = "\u2212";
export const NO_BREAK = "\u00a0";

/**
 * For the eye: true minus signs and apostrophes, no line break between a number and its unit, and nothing that would
 * turn the writing round.
 * @param {string} text
 */
export function typeset(text) {
  return harmless(text)
    .replace(/(^|[\s(]|\de)-(?=\d)/g, `$1${MINUS}`)
    .replace(/(?<=\p{Ll})'(?=s\b)|(?<=s)'(?=\s)/gu, "\u2019")
    .replace(/(\d) : (?=\d)/g, `$1${NO_BREAK}:${NO_BREAK}`)
    .replace(/(\d) (?=%|m?s\b|mm\b|cm\b|S\/m|nAm|µV|V\b)/g, `$1${NO_BREAK}`);
}

/** A fraction as a percentage, with the digits that the engine gives it. @param {number} fraction */
export function percentText(fraction) {
  const percent = 100 * fraction;
  const digits = percent >= 1 || percent === 0 ? percent.toFixed(1) : percent.toPrecision(2);
  return `${percent > 0 && percent < 0.001 ? "under 0.001" : digits}${NO_BREAK}%`;
}

/** A name from outside, without what would turn the writing round or cannot be seen. @param {string} name */
export function harmless(name) {
  return name.replace(/[\u0000-\u001f\u007f-\u009f\u200e\u200f\u202a-\u202e\u2066-\u2069]/g, "\ufffd");
}

/** A harmless name, of which the middle is left out where it is long. @param {string} name */
export function shortName(name) {
  const letters = [...harmless(name)];
  return letters.length <= 48 ? letters.join("") : `${letters.slice(0, 30).join("")}…${letters.slice(-14).join("")}`;
}

/** @param {number} factor */
export function stretchText(factor) {
  return `×${NO_BREAK}${Number(factor.toPrecision(2))}`;
}

/** What a person has typed as a number; a comma stands for a point. @param {string} text */
export function enteredNumber(text) {
  return text.trim() === "" ? Number.NaN : Number(text.trim().replace(",", ".").replace(MINUS, "-"));
}

/** @param {number} time @param {string} unit */
export function timeText(time, unit) {
  return `${enteredText(time).replace("-", MINUS)}${NO_BREAK}${unit}`.trim();
}

/** The end of a scale that has more beyond it. @param {string} level */
export function mostText(level) {
  return `${level} and above`;
}

/** A number as it stands in an entry field. @param {number} value */
export function enteredText(value) {
  return String(Number(value.toPrecision(6)));
}

/** @param {number} seconds */
export function leftText(seconds) {
  return seconds < 90 ? `${Math.max(1, Math.round(seconds))} s` : `${Math.round(seconds / 60)} min`;
}
