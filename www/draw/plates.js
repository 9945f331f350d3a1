/** Figures made of several pictures, as they leave the page: three maps on one scale, and views or slices of a head side by side. */

import { paintBar } from "./bar.js";
import { surfaceAt } from "./canvas.js";
import { paintDisc, paintMapDisc } from "./disc.js";
import { LEAST_WIDTH, paintHead } from "./head.js";
import { LEVEL_DASHES, paintLandscapeBar, paintSlice } from "./landscape.js";
import { letterFont, writeWrapped } from "./marks.js";
import { legendMarks, paintRegion } from "./region.js";

/** @import { Surface, Surroundings } from "./canvas.js" */
/** @import { DiscContent, MapContent } from "./disc.js" */
/** @import { HeadContent } from "./head.js" */
/** @import { SliceContent } from "./landscape.js" */

/** @typedef {(x: number, y: number) => CanvasRenderingContext2D} PenAt */
/** What a bar's ends are called, and words below it. @typedef {{ low: string, high: string, words: string }} ScaleWords */

/** CSS pixels: the sign between two maps, a line of text, a bar; the narrowest view of a row. */
const SIGN_WIDE = 18;
const TEXT_LINE = 15;
const BAR = { wide: 200, high: 12 };
const NARROWEST_VIEW = 150;
const LEAST_DISC = 130;
const LARGEST_DISC = 240;
const HEADING = 18;

/** Squares in a row, or in rows of two where that would be too narrow. @param {number} width @param {number} count */
export function layOutViews(width, count) {
  const columns = width >= NARROWEST_VIEW * count ? count : Math.min(count, 2);
  const side = width / columns;
  const boxes = Array.from({ length: count }, (_, k) => ({ x: (k % columns) * side, y: Math.floor(k / columns) * side, width: side, height: side }));
  return { boxes, height: Math.ceil(count / columns) * side };
}

/**
 * A bar between its ends, and what it says, wrapped.
 * @param {PenAt} penAt
 * @param {number} width
 * @param {number} top
 * @param {ScaleWords} scale
 * @param {(surface: Surface) => void} paint
 * @param {Surroundings} around
 * @returns {number} where it ends
 */
function paintScale(penAt, width, top, { low, high, words }, paint, around) {
  const pen = penAt(0, top);
  pen.font = letterFont(around);
  pen.fillStyle = around.ink;
  pen.textBaseline = "middle";
  const left = (width - BAR.wide) / 2;
  pen.textAlign = "right";
  pen.fillText(low, left - 6, BAR.high / 2);
  pen.textAlign = "start";
  pen.fillText(high, left + BAR.wide + 6, BAR.high / 2);
  paint({ pen: penAt(left, top), width: BAR.wide, height: BAR.high });
  pen.textAlign = "center";
  const lines = writeWrapped(pen, words, width / 2, BAR.high + TEXT_LINE, width - 16, TEXT_LINE);
  return top + BAR.high + TEXT_LINE * (lines + 1);
}

/** A picture's heading, in bold. @param {CanvasRenderingContext2D} pen @param {string} text @param {number} side @param {Surroundings} around */
function writeHeading(pen, text, side, around) {
  pen.fillStyle = around.ink;
  pen.textAlign = "center";
  pen.textBaseline = "middle";
  pen.font = `600 ${letterFont(around)}`;
  pen.fillText(text, side / 2, 9, side);
}

/**
 * Maps by themselves, each on its own scale, in rows.
 * @param {number} width
 * @param {Surroundings} around
 * @param {PenAt} penAt
 * @param {{ heading: string, map: MapContent }[]} maps
 */
export function paintMapRow(width, around, penAt, maps) {
  const columns = Math.max(1, Math.min(maps.length, Math.floor(width / LEAST_DISC)));
  const side = Math.min(width / columns, LARGEST_DISC);
  maps.forEach(({ heading, map }, k) => {
    const [x, y] = [(k % columns) * side, Math.floor(k / columns) * (side + HEADING)];
    writeHeading(penAt(x, y), heading, side, around);
    paintMapDisc(surfaceAt(penAt, { x, y: y + HEADING, width: side, height: side }, LEAST_DISC), map, around);
  });
  return Math.ceil(maps.length / columns) * (side + HEADING);
}

/**
 * measured − one dipole = left over.
 * @param {number} width
 * @param {Surroundings} around
 * @param {PenAt} penAt
 * @param {{ discs: { heading: string, disc: DiscContent }[], scale: ScaleWords }} content
 */
export function paintEquation(width, around, penAt, { discs, scale }) {
  const side = (width - SIGN_WIDE * (discs.length - 1)) / discs.length;
  discs.forEach(({ heading, disc }, k) => {
    const left = k * (side + SIGN_WIDE);
    const pen = penAt(left, 0);
    writeHeading(pen, heading, side, around);
    pen.font = letterFont(around).replace(/^\d+/, "16");
    if (k > 0) pen.fillText(k === 1 ? "\u2212" : "=", -SIGN_WIDE / 2, HEADING + side / 2);
    paintDisc(surfaceAt(penAt, { x: left, y: HEADING, width: side, height: side }, LEAST_DISC), disc, around);
  });
  return paintScale(penAt, width, side + 28, scale, (surface) => paintBar(surface, discs[0].disc.picture, around), around);
}

/**
 * Views of the head side by side, and what is drawn in them.
 * @param {number} width
 * @param {Surroundings} around
 * @param {PenAt} penAt
 * @param {{ views: HeadContent[], marks: { kind: Parameters<typeof legendMarks>[0], text: string }[] }} content
 */
export function paintViews(width, around, penAt, { views, marks }) {
  const { boxes, height } = layOutViews(width, views.length);
  views.forEach((view, k) => paintHead(surfaceAt(penAt, boxes[k], LEAST_WIDTH), view, around));
  let [x, y] = [6, height + 6];
  for (const { kind, text } of marks) {
    const pen = penAt(0, 0);
    pen.font = letterFont(around);
    const wide = 26 + 5 + pen.measureText(text).width;
    if (x > 6 && x + wide > width) [x, y] = [6, y + TEXT_LINE];
    paintRegion(penAt(x, y), ([dx, dy]) => ({ x: dx, y: dy }), legendMarks(kind), around);
    pen.fillStyle = around.ink;
    pen.textBaseline = "middle";
    pen.fillText(text, x + 31, y + 5);
    x += wide + 14;
  }
  return marks.length === 0 ? height : y + TEXT_LINE;
}

/**
 * @param {number} width
 * @param {Surroundings} around
 * @param {PenAt} penAt
 * @param {{ slices: SliceContent[], scale: ScaleWords, levels: string[] }} content
 */
export function paintSlices(width, around, penAt, { slices, scale, levels }) {
  const { boxes, height } = layOutViews(width, slices.length);
  slices.forEach((slice, k) => paintSlice(surfaceAt(penAt, boxes[k], LEAST_WIDTH), slice, around));
  let below = paintScale(penAt, width, height + 4, scale, (surface) => paintLandscapeBar(surface, around), around);
  levels.forEach((text, k) => {
    const pen = penAt(0, below);
    pen.strokeStyle = pen.fillStyle = around.ink;
    pen.lineWidth = 1.25;
    pen.setLineDash(LEVEL_DASHES[k]);
    pen.beginPath();
    pen.moveTo(8, 0);
    pen.lineTo(34, 0);
    pen.stroke();
    pen.font = letterFont(around);
    pen.textBaseline = "middle";
    below += TEXT_LINE * writeWrapped(pen, text, 40, 0, width - 48, TEXT_LINE);
  });
  return below;
}
