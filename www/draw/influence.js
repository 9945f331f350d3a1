/** What a fit hangs on: at each electrode a circle, its area the shift of the position without it. */

import { layOutDisc, paintSides } from "./disc.js";
import { letterFont, markElectrodes, shortLabel, writeHaloed } from "./marks.js";
import { seriesColour } from "./series.js";

/** @import { Surface, Surroundings } from "./canvas.js" */
/** @import { DiscContent } from "./disc.js" */

const LARGEST_CIRCLE = 15;

/**
 * @param {Surface} surface
 * @param {{ picture: Picture, influence: Influence, words: DiscContent["words"] }} content
 * @param {Surroundings} around
 */
export function paintInfluence({ pen, width, height }, { picture, influence, words }, around) {
  const { middle, centre, unit, edge } = layOutDisc(width, height, picture);
  const most = Math.max(1e-9, ...influence.electrodes.map(({ shift_mm }) => shift_mm));
  pen.font = letterFont(around);
  pen.textAlign = "center";
  pen.textBaseline = "middle";
  pen.strokeStyle = around.ink;
  pen.lineWidth = 1;
  for (const { radius } of picture.rings) {
    pen.globalAlpha = radius === edge ? 0.45 : 0.13;
    pen.beginPath();
    pen.arc(middle, centre, unit * radius, 0, 2 * Math.PI);
    pen.stroke();
  }
  pen.globalAlpha = 1;
  const placed = picture.electrodes.map(({ label, x, y, used }) => {
    const one = influence.electrodes.find((other) => other.label === label);
    return { label, x: middle + unit * x, y: centre - unit * y, used, carries: one?.carries === true, size: LARGEST_CIRCLE * Math.sqrt((one?.shift_mm ?? 0) / most) };
  });
  for (const { x, y, size, carries } of placed) {
    pen.beginPath();
    pen.arc(x, y, size, 0, 2 * Math.PI);
    pen.fillStyle = pen.strokeStyle = seriesColour(0, around.theme);
    pen.globalAlpha = carries ? 0.55 : 0.2;
    pen.fill();
    pen.globalAlpha = 1;
    if (carries) pen.stroke();
  }
  markElectrodes(pen, placed, 1.5, around);
  pen.fillStyle = around.ink;
  for (const { label, x, y, size, carries } of placed) if (carries) writeHaloed(pen, shortLabel(label), x, y - size - 7, width, around);
  paintSides(pen, middle, centre, unit * edge, words, around);
}
