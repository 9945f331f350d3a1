/** A map so small that only its pattern can be told: no contour lines, no labels, the front marked by a tick. */

import { imageOfRaster } from "./disc.js";

/** @import { Surroundings } from "./canvas.js" */

/** CSS pixels around the disc, for the tick. */
const MARGIN = 3.5;

/**
 * @param {HTMLCanvasElement} canvas
 * @param {number} side of the canvas in CSS pixels
 * @param {{ size: number, outline: Float32Array, raster: Float32Array } | null} map null while it is not there yet
 * @param {Surroundings} around
 */
export function paintThumbnail(canvas, side, map, { ink, theme, ratio }) {
  const dots = Math.round(side * ratio);
  // Giving a canvas a size empties it.
  Object.assign(canvas, { width: dots, height: dots });
  const pen = canvas.getContext("2d");
  if (pen === null) return;
  const unit = side / 2 - MARGIN;
  pen.scale(dots / side, dots / side);
  pen.translate(side / 2, side / 2);
  if (map !== null) {
    pen.save();
    pen.beginPath();
    for (let i = 0; i + 1 < map.outline.length; i += 2) pen.lineTo(unit * map.outline[i], -unit * map.outline[i + 1]);
    pen.closePath();
    pen.clip();
    pen.imageSmoothingQuality = "high";
    pen.drawImage(imageOfRaster(map.raster, map.size, 1, theme), -unit, -unit, 2 * unit, 2 * unit);
    pen.restore();
  }
  pen.strokeStyle = ink;
  pen.globalAlpha = 0.4;
  pen.beginPath();
  pen.arc(0, 0, unit, 0, 2 * Math.PI);
  pen.moveTo(0, -unit);
  pen.lineTo(0, -unit - 3);
  pen.stroke();
}
