/** The colour bar: the scale from one end to the other, with a tick in each contour line's style at its level. */

import { openCanvas } from "./canvas.js";
import { colourOfShare, cssColour, lineColour } from "./scale.js";

/** @import { Surroundings } from "./canvas.js" */

/**
 * @param {HTMLCanvasElement} canvas
 * @param {Picture} picture
 * @param {Surroundings} around
 */
export function paintBar(canvas, picture, around) {
  const opened = openCanvas(canvas, around);
  if (opened === null) return;
  const { pen, width, height } = opened;
  for (let x = 0; x < width; x++) {
    pen.fillStyle = cssColour(colourOfShare((2 * (x + 0.5)) / width - 1, around.theme));
    pen.fillRect(x, 0, 1.5, height);
  }
  for (const level of picture.levels) {
    const share = level / picture.limit;
    const x = ((share + 1) / 2) * width;
    pen.strokeStyle = lineColour(share, around.theme);
    pen.lineWidth = 1.1;
    pen.setLineDash(level < 0 ? [3, 2] : []);
    pen.beginPath();
    pen.moveTo(x, 0);
    pen.lineTo(x, height);
    pen.stroke();
  }
}
