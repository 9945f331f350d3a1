/**
 * One scalp map on the head's disc: values inside the electrodes' hull, contour lines, electrodes, and the signs
 * that say how it is seen.
 */

import { letterFont, markDipole, markElectrodes, markPointed, shortLabel, writeHaloed } from "./marks.js";
import { colourTable, lineColour } from "./scale.js";

/** @import { Surface, Surroundings } from "./canvas.js" */
/** @import { Theme } from "./scale.js" */

const TABLE_STEPS = 511;
/** CSS pixels around the disc for the letters. */
const DISC_MARGIN = 20;
/** CSS pixels from an electrode to its label. */
const EXTREME_DISTANCE = 12;
/** Half of the dipole's line, in CSS pixels, when it lies level. */
const HALF_LINE = 20;

/**
 * @typedef {object} DiscContent
 * @property {Picture} picture
 * @property {MapRole} role
 * @property {boolean} dipole whether the equivalent dipole is marked
 * @property {Figure} figure
 * @property {number} pointed the electrode pointed at, or -1
 * @property {string} stretched written on the map when it has a stretch of its own, otherwise empty
 * @property {{ front: string, left: string, right: string, above: string }} words
 */

/**
 * Pointing paints the same raster again and again.
 * @type {WeakMap<Float32Array, { theme: Theme, image: HTMLCanvasElement }>}
 */
const IMAGES = new WeakMap();

/**
 * @param {Float32Array} raster shares of the picture's limit
 * @param {number} size
 * @param {number} stretch
 * @param {Theme} theme
 */
export function imageOfRaster(raster, size, stretch, theme) {
  const known = IMAGES.get(raster);
  if (known?.theme === theme) return known.image;
  const image = document.createElement("canvas");
  IMAGES.set(raster, { theme, image });
  image.width = size;
  image.height = size;
  const pen = image.getContext("2d");
  if (pen === null) return image;
  const pixels = pen.createImageData(size, size);
  const table = colourTable(theme, TABLE_STEPS);
  for (let at = 0; at < raster.length; at++) {
    if (Number.isNaN(raster[at])) continue;
    const share = Math.min(1, Math.max(-1, raster[at] * stretch));
    const step = 3 * Math.round(((share + 1) / 2) * (TABLE_STEPS - 1));
    pixels.data[4 * at] = table[step];
    pixels.data[4 * at + 1] = table[step + 1];
    pixels.data[4 * at + 2] = table[step + 2];
    pixels.data[4 * at + 3] = 255;
  }
  pen.putImageData(pixels, 0, 0);
  return image;
}

/**
 * Where the disc lies on its canvas, in CSS pixels.
 * @param {number} width
 * @param {number} height
 * @param {Picture} picture
 */
export function layOutDisc(width, height, picture) {
  const edge = Math.max(...picture.rings.map((ring) => ring.radius), 0.5);
  const unit = Math.max(1, Math.min(width, height) / 2 - DISC_MARGIN) / edge;
  return { middle: width / 2, centre: height / 2, unit, edge };
}

/**
 * The electrode nearest to a point of the canvas, or -1 when none is within reach.
 * @param {HTMLCanvasElement} canvas
 * @param {Picture} picture
 * @param {number} x CSS pixels from the canvas's corner
 * @param {number} y
 * @param {number} reach
 */
export function electrodeOnDisc(canvas, picture, x, y, reach) {
  const { middle, centre, unit } = layOutDisc(canvas.clientWidth, canvas.clientHeight, picture);
  let best = -1;
  let nearest = reach;
  picture.electrodes.forEach((electrode, at) => {
    const distance = Math.hypot(middle + unit * electrode.x - x, centre - unit * electrode.y - y);
    if (distance <= nearest) {
      best = at;
      nearest = distance;
    }
  });
  return best;
}

/** @param {CanvasRenderingContext2D} pen @param {Float32Array} points @param {boolean} closed */
function tracePoints(pen, points, closed) {
  pen.beginPath();
  for (let i = 0; i + 1 < points.length; i += 2) pen.lineTo(points[i], -points[i + 1]);
  if (closed) pen.closePath();
}

/**
 * @param {Surface} surface
 * @param {DiscContent} content
 * @param {Surroundings} around
 */
export function paintDisc({ pen, width, height }, content, around) {
  const { picture, role } = content;
  const place = layOutDisc(width, height, picture);
  const stretch = role === "residual" ? picture.stretch : 1;
  const pixel = 1 / place.unit;

  pen.save();
  pen.translate(place.middle, place.centre);
  pen.scale(place.unit, place.unit);

  pen.save();
  tracePoints(pen, picture.outline, true);
  pen.clip();
  pen.imageSmoothingEnabled = true;
  pen.imageSmoothingQuality = "high";
  pen.drawImage(imageOfRaster(picture[role], picture.size, stretch, around.theme), -1, -1, 2, 2);
  for (const line of picture.contours[role]) {
    pen.strokeStyle = lineColour((line.level / picture.limit) * stretch, around.theme);
    pen.lineWidth = 1.1 * pixel;
    pen.setLineDash(line.level < 0 ? [4 * pixel, 3 * pixel] : []);
    tracePoints(pen, line.points, false);
    pen.stroke();
  }
  pen.restore();

  pen.lineWidth = pixel;
  pen.strokeStyle = around.ink;
  for (const ring of picture.rings) {
    pen.globalAlpha = ring.radius === place.edge ? 0.45 : 0.13;
    pen.beginPath();
    pen.arc(0, 0, ring.radius, 0, 2 * Math.PI);
    pen.stroke();
  }
  pen.globalAlpha = 0.3;
  tracePoints(pen, picture.outline, true);
  pen.stroke();
  pen.restore();

  paintMarks(pen, width, place, content, around);
}

/**
 * The tick in front, and which side is which.
 * @param {CanvasRenderingContext2D} pen
 * @param {number} middle
 * @param {number} centre
 * @param {number} reach
 * @param {DiscContent["words"]} words
 * @param {Surroundings} around
 */
export function paintSides(pen, middle, centre, reach, words, around) {
  pen.strokeStyle = around.ink;
  pen.lineWidth = 1.5;
  pen.beginPath();
  pen.moveTo(middle, centre - reach);
  pen.lineTo(middle, centre - reach - 5);
  pen.stroke();
  pen.fillStyle = around.ink;
  pen.fillText(words.front, middle, centre - reach - 12);
  pen.fillText(words.left, middle - reach - 10, centre);
  pen.fillText(words.right, middle + reach + 10, centre);
  pen.fillText(words.above, middle, centre + reach + 11);
}

/**
 * Electrodes, the dipole, the labels of the largest and smallest value, and the signs around the disc.
 * @param {CanvasRenderingContext2D} pen
 * @param {number} width
 * @param {ReturnType<typeof layOutDisc>} place
 * @param {DiscContent} content
 * @param {Surroundings} around
 */
function paintMarks(pen, width, { middle, centre, unit, edge }, content, around) {
  const { words, picture, role, pointed } = content;
  const extremes = picture.extremes[role];
  const dipole = content.dipole ? picture.dipole : null;
  const labelled = new Set([extremes.max, extremes.min]);
  const marked = picture.electrodes.map(({ x, y, used }, at) => ({ x: middle + unit * x, y: centre - unit * y, used, labelled: labelled.has(at) }));
  for (const [large, radius] of /** @type {const} */ ([[false, 1.3], [true, 2.5]])) {
    markElectrodes(pen, marked.filter((one) => one.labelled === large), radius, around);
  }
  if (dipole !== null) {
    const { axis, dipole: inHead } = content.figure;
    const moment = { dx: HALF_LINE * dipole.dx, dy: -HALF_LINE * dipole.dy, towards: inHead.direction[2], axis };
    markDipole(pen, middle + unit * dipole.x, centre - unit * dipole.y, moment, around);
  }

  pen.font = letterFont(around);
  pen.textAlign = "center";
  pen.textBaseline = "middle";
  /** @type {{ x: number, y: number }[]} */
  const taken = [];
  for (const [at, sign] of /** @type {const} */ ([
    [extremes.max, "+"],
    [extremes.min, "\u2212"],
  ])) {
    const electrode = picture.electrodes[at];
    if (electrode === undefined) continue;
    // The label keeps out of the way of the dipole and inside the disc, and leaves the middle free.
    const above = electrode.y >= (dipole?.y ?? 0);
    const upwards = Math.hypot(electrode.x, electrode.y) > 0.8 * edge ? electrode.y < 0 : above;
    const distance = EXTREME_DISTANCE + (dipole === null ? 0 : 4) + (at === pointed ? 3 : 0);
    const label = { x: middle + unit * electrode.x, y: centre - unit * electrode.y + (upwards ? -distance : distance) };
    writeHaloed(pen, `${sign}\u2009${shortLabel(electrode.label)}`, label.x, label.y, width, around);
    taken.push(label);
  }

  const reach = unit * edge;
  paintSides(pen, middle, centre, reach, words, around);
  if (content.stretched !== "") {
    pen.textAlign = "right";
    pen.fillText(content.stretched, middle + reach, centre - reach + 2);
    pen.textAlign = "center";
  }

  const shown = picture.electrodes[pointed];
  if (shown === undefined) return;
  const label = labelled.has(pointed) ? "" : shown.label;
  markPointed(pen, middle + unit * shown.x, centre - unit * shown.y, label, width, around, taken);
}

/** @typedef {{ raster: Float32Array, size: number, outline: Float32Array, sign: number, words: DiscContent["words"] }} MapContent */

/**
 * One map by itself, without contour lines: its colours, the rim, and the signs of how it is seen.
 * @param {Surface} surface
 * @param {MapContent} content
 * @param {Surroundings} around
 */
export function paintMapDisc({ pen, width, height }, { raster, size, outline, sign, words }, around) {
  const reach = Math.max(1, Math.min(width, height) / 2 - DISC_MARGIN);
  const [middle, centre] = [width / 2, height / 2];
  pen.save();
  pen.translate(middle, centre);
  pen.scale(reach, reach);
  tracePoints(pen, outline, true);
  pen.clip();
  pen.imageSmoothingQuality = "high";
  pen.drawImage(imageOfRaster(raster, size, sign, around.theme), -1, -1, 2, 2);
  pen.restore();
  pen.strokeStyle = around.ink;
  pen.globalAlpha = 0.45;
  pen.beginPath();
  pen.arc(middle, centre, reach, 0, 2 * Math.PI);
  pen.stroke();
  pen.globalAlpha = 1;
  pen.font = letterFont(around);
  pen.textAlign = "center";
  pen.textBaseline = "middle";
  paintSides(pen, middle, centre, reach, words, around);
}
