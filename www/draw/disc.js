/**
 * One scalp map on the head's disc: values inside the electrodes' hull, contour lines, electrodes, and the signs
 * that say how it is seen.
 */

import { openCanvas } from "./canvas.js";
import { harmless } from "../text/figures.js";
import { colourOfShare, colourTable, cssColour } from "./scale.js";

/** @import { Surroundings } from "./canvas.js" */
/** @import { Theme } from "./scale.js" */

const TABLE_STEPS = 511;
/** CSS pixels around the disc for the letters. */
const MARGIN = 20;
/** CSS pixels from an electrode to its label. */
const LABEL_DISTANCE = 12;
/** Letters of a label that are shown. */
const MOST_LETTERS = 8;

/**
 * @typedef {object} DiscContent
 * @property {Picture} picture
 * @property {MapRole} role
 * @property {boolean} dipole whether the equivalent dipole is marked
 * @property {string} stretched written on the map when it has a stretch of its own, otherwise empty
 * @property {{ front: string, left: string, right: string, above: string }} words
 */

/**
 * @param {Float32Array} raster shares of the picture's limit
 * @param {number} size
 * @param {number} stretch
 * @param {Theme} theme
 */
function imageOfRaster(raster, size, stretch, theme) {
  const image = document.createElement("canvas");
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

/** @param {CanvasRenderingContext2D} pen @param {Float32Array} points @param {boolean} closed */
function tracePoints(pen, points, closed) {
  pen.beginPath();
  for (let i = 0; i + 1 < points.length; i += 2) pen.lineTo(points[i], -points[i + 1]);
  if (closed) pen.closePath();
}

/**
 * @param {HTMLCanvasElement} canvas
 * @param {DiscContent} content
 * @param {Surroundings} around
 */
export function paintDisc(canvas, content, around) {
  const opened = openCanvas(canvas, around.ratio);
  if (opened === null) return;
  const { pen, width, height } = opened;
  const { picture, role } = content;
  const edge = Math.max(...picture.rings.map((ring) => ring.radius), 0.5);
  const unit = Math.max(1, Math.min(width, height) / 2 - MARGIN) / edge;
  const stretch = role === "residual" ? picture.stretch : 1;
  const pixel = 1 / unit;

  pen.save();
  pen.translate(width / 2, height / 2);
  pen.scale(unit, unit);

  pen.save();
  tracePoints(pen, picture.outline, true);
  pen.clip();
  pen.imageSmoothingEnabled = true;
  pen.imageSmoothingQuality = "high";
  pen.drawImage(imageOfRaster(picture[role], picture.size, stretch, around.theme), -1, -1, 2, 2);
  for (const line of picture.contours[role]) {
    const shift = around.theme === "light" ? -0.2 : 0.16;
    pen.strokeStyle = cssColour(colourOfShare((line.level / picture.limit) * stretch, around.theme, shift));
    pen.lineWidth = 1.1 * pixel;
    pen.setLineDash(line.level < 0 ? [4 * pixel, 3 * pixel] : []);
    tracePoints(pen, line.points, false);
    pen.stroke();
  }
  pen.restore();

  pen.lineWidth = pixel;
  pen.strokeStyle = around.ink;
  for (const ring of picture.rings) {
    pen.globalAlpha = ring.radius === edge ? 0.45 : 0.13;
    pen.beginPath();
    pen.arc(0, 0, ring.radius, 0, 2 * Math.PI);
    pen.stroke();
  }
  pen.globalAlpha = 0.3;
  tracePoints(pen, picture.outline, true);
  pen.stroke();
  pen.globalAlpha = 1;
  paintElectrodes(pen, picture, pixel, around);
  if (content.dipole && picture.dipole !== null) paintDipole(pen, picture.dipole, pixel, around);
  pen.restore();

  paintLetters(pen, width / 2, height / 2, unit, edge, content, around);
}

/**
 * @param {CanvasRenderingContext2D} pen
 * @param {Picture} picture
 * @param {number} pixel
 * @param {Surroundings} around
 */
function paintElectrodes(pen, picture, pixel, around) {
  pen.fillStyle = around.ink;
  pen.strokeStyle = around.ink;
  pen.lineWidth = pixel;
  for (const electrode of picture.electrodes) {
    pen.beginPath();
    pen.arc(electrode.x, -electrode.y, (electrode.used ? 1.3 : 2.2) * pixel, 0, 2 * Math.PI);
    if (electrode.used) pen.fill();
    else pen.stroke();
  }
}

/**
 * An axis, not an arrow: a component's sign is arbitrary.
 * @param {CanvasRenderingContext2D} pen
 * @param {NonNullable<Picture["dipole"]>} dipole
 * @param {number} pixel
 * @param {Surroundings} around
 */
function paintDipole(pen, dipole, pixel, around) {
  const half = 20 * pixel;
  pen.lineCap = "round";
  for (const [colour, halo] of /** @type {const} */ ([
    [around.paper, 1.5],
    [around.ink, 0],
  ])) {
    pen.strokeStyle = colour;
    pen.fillStyle = colour;
    pen.lineWidth = (2 + 2 * halo) * pixel;
    pen.beginPath();
    pen.moveTo(dipole.x - half * dipole.dx, -dipole.y + half * dipole.dy);
    pen.lineTo(dipole.x + half * dipole.dx, -dipole.y - half * dipole.dy);
    pen.stroke();
    pen.beginPath();
    pen.arc(dipole.x, -dipole.y, (4 + halo) * pixel, 0, 2 * Math.PI);
    pen.fill();
  }
}

/**
 * Text with a halo of paper, readable on any value.
 * @param {CanvasRenderingContext2D} pen
 * @param {string} text
 * @param {number} x
 * @param {number} y
 * @param {Surroundings} around
 */
function writeHaloed(pen, text, x, y, around) {
  pen.lineWidth = 3;
  pen.lineJoin = "round";
  pen.strokeStyle = around.paper;
  pen.strokeText(text, x, y);
  pen.fillStyle = around.ink;
  pen.fillText(text, x, y);
}

/** A label that leaves room for the letters around the disc. @param {string} label */
function shortLabel(label) {
  const letters = [...harmless(label)];
  return letters.length > MOST_LETTERS ? `${letters.slice(0, MOST_LETTERS - 1).join("")}…` : letters.join("");
}

/**
 * Labels of the largest and smallest value, and the signs around the disc.
 * @param {CanvasRenderingContext2D} pen
 * @param {number} middle of the canvas, across
 * @param {number} centre of the canvas, down
 * @param {number} unit
 * @param {number} edge
 * @param {DiscContent} content
 * @param {Surroundings} around
 */
function paintLetters(pen, middle, centre, unit, edge, content, around) {
  const { words, picture, role } = content;
  pen.font = `11px ${around.font}`;
  pen.textAlign = "center";
  pen.textBaseline = "middle";
  for (const [key, sign] of /** @type {const} */ ([
    ["max", "+"],
    ["min", "\u2212"],
  ])) {
    const electrode = picture.electrodes[picture.extremes[role][key]];
    if (electrode === undefined) continue;
    // The label keeps out of the way of the dipole and inside the disc, and leaves the middle free.
    const dipole = content.dipole ? picture.dipole : null;
    const above = electrode.y >= (dipole?.y ?? 0);
    const upwards = Math.hypot(electrode.x, electrode.y) > 0.8 * edge ? electrode.y < 0 : above;
    const distance = dipole === null ? LABEL_DISTANCE : LABEL_DISTANCE + 4;
    const y = centre - unit * electrode.y + (upwards ? -distance : distance);
    writeHaloed(pen, `${sign}\u2009${shortLabel(electrode.label)}`, middle + unit * electrode.x, y, around);
  }
  const reach = unit * edge;
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
  if (content.stretched !== "") {
    pen.textAlign = "right";
    pen.fillText(content.stretched, middle + reach, centre - reach + 2);
  }
}
