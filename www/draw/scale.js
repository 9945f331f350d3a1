/**
 * The colours of values: deep teal below zero, burnt ochre above, built in OKLab (Ottosson 2020).
 *
 * On each side lightness and chroma run in equal steps from the middle and the hue stays: equal differences of value
 * are equal distances in OKLab. Both ends share lightness and chroma, so in grey the size of a value can be read and
 * its sign is left to the contour lines. The middle is near the paper, in dark surroundings near black.
 */

const HUE_NEGATIVE = 217;
const HUE_POSITIVE = 58;
const MIDDLE_LIGHTNESS = { light: 0.97, dark: 0.27 };
const END_LIGHTNESS = { light: 0.47, dark: 0.8 };
/** The most that sRGB reaches at the ends in both hues. */
const END_CHROMA = { light: 0.083, dark: 0.098 };
/** Lightness of a line, less that of the values it runs through. */
const LINE_SHIFT = { light: -0.2, dark: 0.16 };

/** @typedef {"light" | "dark"} Theme */

/** @param {number} channel linear light, 0 to 1 */
function encodeChannel(channel) {
  const bounded = Math.min(1, Math.max(0, channel));
  return Math.round(255 * (bounded <= 0.0031308 ? 12.92 * bounded : 1.055 * bounded ** (1 / 2.4) - 0.055));
}

/**
 * @param {number} lightness
 * @param {number} chroma
 * @param {number} hue in degrees
 * @returns {[number, number, number]} linear light; outside 0 to 1 where sRGB does not reach
 */
export function linearOfOklch(lightness, chroma, hue) {
  const a = chroma * Math.cos((hue * Math.PI) / 180);
  const b = chroma * Math.sin((hue * Math.PI) / 180);
  const l = (lightness + 0.3963377774 * a + 0.2158037573 * b) ** 3;
  const m = (lightness - 0.1055613458 * a - 0.0638541728 * b) ** 3;
  const s = (lightness - 0.0894841775 * a - 1.291485548 * b) ** 3;
  return [
    4.0767416621 * l - 3.3077115913 * m + 0.2309699292 * s,
    -1.2684380046 * l + 2.6097574011 * m - 0.3413193965 * s,
    -0.0041960863 * l - 0.7034186147 * m + 1.707614701 * s,
  ];
}

/**
 * @param {number} share of the limit, -1 to 1
 * @param {Theme} theme
 * @param {number} [shift] of lightness: for lines that must be seen on their own level
 */
export function oklchOfShare(share, theme, shift = 0) {
  const size = Math.min(1, Math.abs(share));
  return {
    lightness: MIDDLE_LIGHTNESS[theme] + (END_LIGHTNESS[theme] - MIDDLE_LIGHTNESS[theme]) * size + shift,
    chroma: END_CHROMA[theme] * size,
    hue: share < 0 ? HUE_NEGATIVE : HUE_POSITIVE,
  };
}

/**
 * @param {number} share
 * @param {Theme} theme
 * @param {number} [shift]
 * @returns {[number, number, number]} sRGB, 0 to 255
 */
export function colourOfShare(share, theme, shift) {
  const { lightness, chroma, hue } = oklchOfShare(share, theme, shift);
  return encodeLight(linearOfOklch(lightness, chroma, hue));
}

/** @param {[number, number, number]} light linear @returns {[number, number, number]} sRGB, 0 to 255 */
export function encodeLight([red, green, blue]) {
  return [encodeChannel(red), encodeChannel(green), encodeChannel(blue)];
}

/** @param {[number, number, number]} colour */
export function cssColour([red, green, blue]) {
  return `rgb(${red} ${green} ${blue})`;
}

/** Of a contour line, which must be seen on its own level. @param {number} share @param {Theme} theme */
export function lineColour(share, theme) {
  return cssColour(colourOfShare(share, theme, LINE_SHIFT[theme]));
}

/** Colours of equal steps over the whole scale, packed for an image. @param {Theme} theme @param {number} steps */
export function colourTable(theme, steps) {
  const table = new Uint8ClampedArray(3 * steps);
  for (let i = 0; i < steps; i++) table.set(colourOfShare((2 * i) / (steps - 1) - 1, theme), 3 * i);
  return table;
}
