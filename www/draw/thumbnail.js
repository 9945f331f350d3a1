/** A map so small that only its pattern can be told: no contour lines, no labels, the front marked by a tick. */

import { imageOfRaster } from "./disc.js";

/** @import { Surface, Surroundings } from "./canvas.js" */

/** CSS pixels around the disc, for the tick. */
const MARGIN = 3.5;

/**
 * @param {Surface} surface
 * @param {{ size: number, outline: Float32Array, raster: Float32Array } | null} map null while it is not there yet
 * @param {Surroundings} around
 */
export function paintThumbnail({ pen, width }, map, { ink, theme }) {
  const unit = width / 2 - MARGIN;
  pen.translate(width / 2, width / 2);
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
