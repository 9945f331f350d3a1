/**
 * Colours and dashes that tell decompositions apart, and the colours of residual variance.
 *
 * Six colours in OKLCH, searched for the largest distance between any two as seen with full colour vision and with each
 * of the three deficiencies; in grey, dashes tell lines apart and shapes tell points apart. Residual variance runs in equal steps of OKLab
 * from the ink's side to the paper's.
 */

import { cssColour, encodeLight, linearOfOklch } from "./scale.js";

/** @import { Theme } from "./scale.js" */

/** Lightness, chroma, hue. @type {Record<Theme, [number, number, number][]>} */
const SERIES = {
  light: [
    [0.45, 0.083, 217],
    [0.6, 0.13, 55],
    [0.3, 0.114, 270],
    [0.62, 0.149, 267],
    [0.3, 0.1, 41],
    [0.64, 0.03, 330],
  ],
  dark: [
    [0.78, 0.098, 217],
    [0.7, 0.12, 55],
    [0.648, 0.126, 275],
    [0.92, 0.085, 182],
    [0.805, 0.15, 92],
    [0.62, 0.054, 352],
  ],
};

/** Lengths of strokes and gaps in CSS pixels. */
const DASHES = [[], [7, 3], [2, 2.5], [12, 3, 2, 3], [5, 2.5, 1.5, 2.5, 1.5, 2.5], [14, 4], [4, 4]];

/** The ends of the colours of residual variance, lightness and the two axes of colour: from a good fit to a poor one. */
const RV_ENDS = {
  light: { good: [0.33, 0.08, -0.09], poor: [0.8, 0.01, 0.11] },
  dark: { good: [0.93, -0.005, 0.1], poor: [0.5, 0.08, -0.05] },
};
/** The residual variance at which the colours end; what is above has the last one. */
export const RV_MOST = 0.3;

/** @param {number} index of the decomposition @param {Theme} theme */
export function seriesColour(index, theme) {
  return cssColour(encodeLight(linearOfOklch(...SERIES[theme][index % SERIES[theme].length])));
}

/** Combined with the colours: as many pairs as the product of both numbers, which have no common factor. @param {number} index */
export function seriesDash(index) {
  return DASHES[index % DASHES.length];
}

/** @param {number} rv @param {Theme} theme */
export function rvColour(rv, theme) {
  const { good, poor } = RV_ENDS[theme];
  const share = Math.min(1, Math.max(0, rv / RV_MOST));
  const [lightness, a, b] = good.map((part, at) => part + (poor[at] - part) * share);
  const hue = (Math.atan2(b, a) * 180) / Math.PI;
  return cssColour(encodeLight(linearOfOklch(lightness, Math.hypot(a, b), hue)));
}
