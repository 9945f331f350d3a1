/** Residual variance against eccentricity as a density: one small picture for each reference population, this map in it. */

import { paintAxes } from "./curves.js";
import { letterFont, writeHaloed } from "./marks.js";
import { cssColour, encodeLight, linearOfOklch } from "./scale.js";
import { enteredText } from "../text/figures.js";

/** @import { Surroundings } from "./canvas.js" */
/** @import { Theme } from "./scale.js" */

/** Cells to a side; decades of residual variance below 1; steps of colour. */
const CELLS = 25;
const FEWEST_DECADES = 3;
const STEPS = 6;
const AROUND_PANEL = { left: 40, top: 22, right: 10, bottom: 40 };
const NARROWEST = 190;
/** Lightness of the fewest and of the most draws. @type {Record<Theme, [number, number]>} */
const DENSITY_ENDS = { light: [0.92, 0.42], dark: [0.33, 0.86] };

/** @typedef {{ title: string, counts: number[] }} DensityPanel */
/** @typedef {{ panels: DensityPanel[], here: { rv: number, eccentricity: number }, words: { x: string, y: string, here: string } }} DensityContent */

/** @param {number} value 0 to 1 */
function cellOf(value) {
  return Math.min(CELLS - 1, Math.max(0, Math.floor(CELLS * value)));
}

/** Place of a residual variance on a logarithmic axis, 0 to 1. @param {number} rv */
function heightOf(rv) {
  return Math.min(1, Math.max(0, 1 + Math.log10(Math.max(rv, 1e-9)) / FEWEST_DECADES));
}

/** How many draws fall into each cell, from the lower left on. @param {Float64Array} numbers of a population */
export function densityCounts(numbers) {
  const counts = new Array(CELLS * CELLS).fill(0);
  for (let at = 0; at + 1 < numbers.length; at += 2) {
    counts[CELLS * cellOf(heightOf(numbers[at])) + cellOf(Math.abs(numbers[at + 1]))]++;
  }
  return counts;
}

/** @param {number} width @param {number} count of panels */
function panelsOf(width, count) {
  const columns = Math.max(1, Math.min(3, count, Math.floor(width / NARROWEST)));
  const wide = width / columns;
  return { columns, wide, high: Math.min(260, 0.85 * wide) };
}

/** @param {number} step 1 to `STEPS` @param {Theme} theme */
function densityColour(step, theme) {
  const [few, many] = DENSITY_ENDS[theme];
  return cssColour(encodeLight(linearOfOklch(few + ((many - few) * (step - 1)) / (STEPS - 1), 0.02 + (0.06 * step) / STEPS, 217)));
}

/**
 * @param {(x: number, y: number) => CanvasRenderingContext2D} penAt
 * @param {number} width
 * @param {DensityContent} content
 * @param {Surroundings} around
 * @returns {number} the height it takes
 */
export function paintDensities(penAt, width, { panels, here, words }, around) {
  const { columns, wide, high } = panelsOf(width, panels.length);
  const { left, top } = AROUND_PANEL;
  const [right, bottom] = [wide - AROUND_PANEL.right, high - AROUND_PANEL.bottom];
  /** @param {number} share */
  const x = (share) => left + (right - left) * share;
  /** @param {number} share */
  const y = (share) => bottom - (bottom - top) * share;
  panels.forEach(({ title, counts }, at) => {
    const pen = penAt((at % columns) * wide, Math.floor(at / columns) * high);
    pen.font = letterFont(around);
    const most = Math.max(...counts);
    // One path for each colour; roots, so that what is rare is seen too.
    for (let step = 1; step <= STEPS; step++) {
      pen.beginPath();
      counts.forEach((count, cell) => {
        if (count === 0 || Math.ceil(STEPS * Math.sqrt(count / most)) !== step) return;
        const [column, row] = [cell % CELLS, Math.floor(cell / CELLS)];
        pen.moveTo(x(column / CELLS), y(row / CELLS));
        pen.lineTo(x((column + 1) / CELLS), y(row / CELLS));
        pen.lineTo(x((column + 1) / CELLS), y((row + 1) / CELLS));
        pen.lineTo(x(column / CELLS), y((row + 1) / CELLS));
        pen.closePath();
      });
      pen.fillStyle = densityColour(step, around.theme);
      pen.fill();
    }
    const up = [0.001, 0.01, 0.1, 1].map((rv) => /** @type {[number, string]} */ ([y(heightOf(rv)), enteredText(100 * rv)]));
    const across = [0, 0.5, 1].map((share) => /** @type {[number, string]} */ ([x(share), enteredText(share)]));
    paintAxes(pen, { left, right, top, bottom }, { across, up, words: { x: words.x, y: "" } }, around);
    pen.textAlign = "start";
    pen.font = `600 ${letterFont(around)}`;
    pen.fillText(title, left, 10);
    pen.font = letterFont(around);
    pen.textAlign = "right";
    if (at % columns === 0) pen.fillText(words.y, left - 7, 10);
    const [hereX, hereY] = [x(here.eccentricity), y(heightOf(here.rv))];
    for (const [ink, line] of /** @type {[string, number][]} */ ([[around.paper, 4.5], [around.ink, 1.75]])) {
      pen.beginPath();
      pen.arc(hereX, hereY, 5, 0, 2 * Math.PI);
      pen.strokeStyle = ink;
      pen.lineWidth = line;
      pen.stroke();
    }
    pen.textAlign = "center";
    if (at === 0) writeHaloed(pen, words.here, hereX, hereY + (hereY < top + 30 ? 14 : -14), wide, around);
  });
  return Math.ceil(panels.length / columns) * high;
}
