/** Scales of colour: the bar of the maps, with a tick in each contour line's style at its level, and what all bars are made of. */

import { colourOfShare, cssColour, lineColour } from "./scale.js";

/** @import { Surface, Surroundings } from "./canvas.js" */

const BAR_STEPS = 120;

/**
 * Colours in equal steps from the left on.
 * @param {CanvasRenderingContext2D} pen
 * @param {{ x: number, y: number, width: number, height: number }} box
 * @param {(share: number) => string} colour of a place, 0 to 1
 * @param {number} [steps]
 */
export function paintSteps(pen, { x, y, width, height }, colour, steps = BAR_STEPS) {
  for (let k = 0; k < steps; k++) {
    pen.fillStyle = colour((k + 0.5) / steps);
    // Each reaches to the end, so that no seam is seen.
    pen.fillRect(x + (width * k) / steps, y, width - (width * k) / steps, height);
  }
}

/**
 * @param {Surface} surface
 * @param {Picture} picture
 * @param {Surroundings} around
 */
export function paintBar({ pen, width, height }, picture, { theme }) {
  paintSteps(pen, { x: 0, y: 0, width, height }, (share) => cssColour(colourOfShare(2 * share - 1, theme)));
  for (const level of picture.levels) {
    const share = level / picture.limit;
    const x = ((share + 1) / 2) * width;
    pen.strokeStyle = lineColour(share, theme);
    pen.lineWidth = 1.1;
    pen.setLineDash(level < 0 ? [3, 2] : []);
    pen.beginPath();
    pen.moveTo(x, 0);
    pen.lineTo(x, height);
    pen.stroke();
  }
  pen.setLineDash([]);
}
