/** Residual variance over the brain, in a slice through it: the darker (in the dark: lighter), the better a dipole fits there. */

import { paintSteps } from "./bar.js";
import { shrinkOf } from "./canvas.js";
import { layOutHead, LEAST_WIDTH, paintPeg, paintShells, seenFrom } from "./head.js";
import { letterFont, markDipole, writeHaloed } from "./marks.js";
import { strokeOther } from "./region.js";
import { cssColour, encodeLight, linearOfOklch } from "./scale.js";

/** @import { Surface, Surroundings } from "./canvas.js" */
/** @import { Side, Standpoint } from "./head.js" */
/** @import { Theme } from "./scale.js" */

/** Lightness of the best and of the poorest fit. @type {Record<Theme, [number, number]>} */
const RV_LIGHTNESS = { light: [0.45, 0.95], dark: [0.85, 0.26] };
/** The level of the region, and residual variance and 1 %. */
export const LEVEL_DASHES = [[], [4, 3]];
const HALF_AXIS = 0.2;
const RV_STEPS = 128;

/**
 * @typedef {object} SliceContent
 * @property {Landscape} landscape
 * @property {Landscape["slices"][number]} slice
 * @property {Figure} figure
 * @property {Probe | null} hand
 * @property {Probe | null} felt
 * @property {Standpoint} from
 * @property {{ side: Side, text: string }[]} letters
 * @property {string} seen
 */

/** Place on the scale from the best fit to nothing explained, 0 to 1: low residual variance takes the greater part of it. @param {number} rv @param {number} least */
export function landscapeShare(rv, least) {
  return Math.sqrt(Math.min(1, Math.max(0, (rv - least) / Math.max(1e-9, 1 - least))));
}

/** @param {number} share @param {Theme} theme @returns {[number, number, number]} */
function landscapeColour(share, theme) {
  const [best, poorest] = RV_LIGHTNESS[theme];
  return encodeLight(linearOfOklch(best + (poorest - best) * share, 0.09 - 0.08 * share, 217));
}

/** The least residual variance of all slices. @param {Landscape} landscape */
export function leastOf({ slices }) {
  return slices.reduce((least, { rv }) => rv.reduce((one, other) => (other < one ? other : one), least), 1);
}

/** Moving repeats the same slice. @type {WeakMap<Float32Array, { theme: Theme, least: number, image: HTMLCanvasElement }>} */
const SLICE_IMAGES = new WeakMap();

/** @param {Float32Array} rv @param {number} size @param {number} least @param {Theme} theme */
function imageOfSlice(rv, size, least, theme) {
  const known = SLICE_IMAGES.get(rv);
  if (known?.theme === theme && known.least === least) return known.image;
  const image = Object.assign(document.createElement("canvas"), { width: size, height: size });
  SLICE_IMAGES.set(rv, { theme, least, image });
  const pen = image.getContext("2d");
  if (pen === null) return image;
  const pixels = pen.createImageData(size, size);
  const table = Array.from({ length: RV_STEPS }, (_, step) => landscapeColour(step / (RV_STEPS - 1), theme));
  rv.forEach((value, at) => {
    if (Number.isNaN(value)) return;
    pixels.data.set([...table[Math.round(landscapeShare(value, least) * (RV_STEPS - 1))], 255], 4 * at);
  });
  pen.putImageData(pixels, 0, 0);
  return image;
}

/**
 * @param {Surface} surface no narrower than `LEAST_WIDTH`
 * @param {SliceContent} content
 * @param {Surroundings} around
 */
export function paintSlice({ pen, width, height }, { landscape, slice, figure, hand, felt, from, letters, seen }, around) {
  const { middle, centre, radius } = layOutHead(width, height);
  const turned = seenFrom(from);
  /** @param {number[]} point */
  const place = (point) => {
    const { x, y, z } = turned(point);
    return { x: middle + radius * x, y: centre - radius * y, z };
  };
  pen.font = letterFont(around);
  pen.textAlign = "center";
  pen.textBaseline = "middle";
  const reach = radius * landscape.brain;
  pen.save();
  pen.beginPath();
  pen.arc(middle, centre, reach, 0, 2 * Math.PI);
  pen.clip();
  pen.imageSmoothingQuality = "high";
  const image = imageOfSlice(slice.rv, landscape.size, leastOf(landscape), around.theme);
  pen.drawImage(image, middle - reach, centre - reach, 2 * reach, 2 * reach);
  pen.restore();
  for (const { level, points } of slice.contours) {
    const which = landscape.levels.findIndex(({ rv }) => Math.abs(rv - level) < 1e-6);
    for (const [ink, line] of /** @type {[string, number][]} */ ([[around.paper, 3], [around.ink, 1.25]])) {
      pen.strokeStyle = ink;
      pen.lineWidth = line;
      pen.globalAlpha = ink === around.paper ? 0.6 : 1;
      pen.setLineDash(ink === around.paper ? [] : LEVEL_DASHES[Math.max(0, which)]);
      pen.beginPath();
      for (let i = 0; i + 1 < points.length; i += 2) pen.lineTo(middle + radius * points[i], centre - radius * points[i + 1]);
      pen.stroke();
    }
  }
  pen.globalAlpha = 1;
  pen.setLineDash([]);
  paintShells(pen, middle, centre, radius, { ...figure, dipole: null }, around);
  for (const near of [false, true]) for (const letter of letters) paintPeg(pen, place, radius, letter, near, width, around);

  // Where the two other slices run.
  const at = place(hand?.at ?? landscape.at);
  pen.strokeStyle = around.ink;
  pen.lineWidth = 1;
  pen.globalAlpha = 0.35;
  pen.beginPath();
  pen.moveTo(at.x, centre - reach);
  pen.lineTo(at.x, centre + reach);
  pen.moveTo(middle - reach, at.y);
  pen.lineTo(middle + reach, at.y);
  pen.stroke();
  pen.globalAlpha = 1;
  const { position, direction } = figure.dipole;
  const [foot, end] = [position, position.map((part, axis) => part + HALF_AXIS * direction[axis])].map(place);
  if (hand !== null) pen.globalAlpha = 0.45;
  markDipole(pen, foot.x, foot.y, { dx: end.x - foot.x, dy: end.y - foot.y, towards: end.z - foot.z, axis: figure.axis }, around);
  pen.globalAlpha = 1;
  for (const one of [hand, felt]) if (one !== null) strokeOther(pen, place, { kind: "hand", position: one.at, direction: one.direction }, around);
  pen.fillStyle = around.ink;
  writeHaloed(pen, seen, middle, height - 7, width, around);
}

/**
 * A point of a slice's canvas in the two axes of the slice, the scalp at 1.
 * @param {HTMLCanvasElement} canvas
 * @param {number} x CSS pixels from the canvas's corner
 * @param {number} y
 */
export function pointOnSlice(canvas, x, y) {
  const shrink = shrinkOf(canvas, LEAST_WIDTH);
  const { middle, centre, radius } = layOutHead(shrink * canvas.clientWidth, shrink * canvas.clientHeight);
  return [(shrink * x - middle) / radius, (centre - shrink * y) / radius];
}

/** The colours from the best fit on. @param {Surface} surface @param {Surroundings} around */
export function paintLandscapeBar({ pen, width, height }, { theme }) {
  paintSteps(pen, { x: 0, y: 0, width, height }, (share) => cssColour(landscapeColour(share, theme)));
}
