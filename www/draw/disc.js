/**
 * One scalp map on the head's disc: values inside the electrodes' hull, contour lines, electrodes, and the signs
 * that say how it is seen.
 */

import { openCanvas } from "./canvas.js";
import { colourOfShare, colourTable, cssColour } from "./scale.js";

const TABLE_STEPS = 511;
/** Share of half the canvas that the unit disc takes; the rest is for the letters around it. */
const DISC_SHARE = 0.86;

/**
 * @typedef {object} DiscContent
 * @property {Picture} picture
 * @property {MapRole} role
 * @property {boolean} dipole whether the equivalent dipole is marked
 * @property {string} stretched written on the map when it has a stretch of its own, otherwise empty
 * @property {{ front: string, left: string, right: string, above: string }} words
 */

/** @param {Float32Array} raster @param {number} size @returns {Float32Array} */
function spreadOutwards(raster, size) {
  // The hull's edge cuts through pixels; values go on two pixels beyond it so that smoothing finds no hole there.
  let now = raster;
  for (let round = 0; round < 2; round++) {
    const next = now.slice();
    for (let at = 0; at < now.length; at++) {
      if (!Number.isNaN(now[at])) continue;
      const column = at % size;
      let sum = 0;
      let count = 0;
      for (let dy = -size; dy <= size; dy += size) {
        for (let dx = -1; dx <= 1; dx++) {
          const value = column + dx < 0 || column + dx >= size ? NaN : (now[at + dy + dx] ?? NaN);
          if (Number.isNaN(value)) continue;
          sum += value;
          count += 1;
        }
      }
      if (count > 0) next[at] = sum / count;
    }
    now = next;
  }
  return now;
}

/**
 * @param {Float32Array} raster
 * @param {number} size
 * @param {number} limit
 * @param {import("./scale.js").Theme} theme
 */
function imageOfRaster(raster, size, limit, theme) {
  const image = document.createElement("canvas");
  image.width = size;
  image.height = size;
  const pen = image.getContext("2d");
  if (pen === null) return image;
  const pixels = pen.createImageData(size, size);
  const table = colourTable(theme, TABLE_STEPS);
  const spread = spreadOutwards(raster, size);
  for (let at = 0; at < spread.length; at++) {
    const value = spread[at];
    if (Number.isNaN(value)) continue;
    const share = limit > 0 ? Math.min(1, Math.max(-1, value / limit)) : 0;
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

/** Text with a halo of paper, readable on any value. @param {CanvasRenderingContext2D} pen @param {string} text @param {number} x @param {number} y @param {import("./canvas.js").Surroundings} around */
function writeHaloed(pen, text, x, y, around) {
  pen.lineWidth = 3;
  pen.lineJoin = "round";
  pen.strokeStyle = around.paper;
  pen.strokeText(text, x, y);
  pen.fillStyle = around.ink;
  pen.fillText(text, x, y);
}

/**
 * @param {HTMLCanvasElement} canvas
 * @param {DiscContent} content
 * @param {import("./canvas.js").Surroundings} around
 */
export function paintDisc(canvas, content, around) {
  const opened = openCanvas(canvas, around.ratio);
  if (opened === null) return;
  const { pen, width, height } = opened;
  const { picture, role } = content;
  const unit = (Math.min(width, height) / 2) * DISC_SHARE;
  const limit = role === "residual" ? picture.limit / picture.stretch : picture.limit;
  const pixel = 1 / unit;

  pen.save();
  pen.translate(width / 2, height / 2);
  pen.scale(unit, unit);

  pen.strokeStyle = around.ink;
  pen.globalAlpha = 0.22;
  pen.lineWidth = pixel;
  for (const ring of picture.rings) {
    pen.beginPath();
    pen.arc(0, 0, ring.radius, 0, 2 * Math.PI);
    pen.stroke();
  }
  pen.globalAlpha = 1;

  pen.save();
  tracePoints(pen, picture.outline, true);
  pen.clip();
  pen.imageSmoothingEnabled = true;
  pen.imageSmoothingQuality = "high";
  // Pixel centres span [-1, 1]: the image is half a pixel larger on every side.
  const reach = picture.size / (picture.size - 1);
  pen.drawImage(imageOfRaster(picture[role], picture.size, limit, around.theme), -reach, -reach, 2 * reach, 2 * reach);
  for (const line of picture.contours[role]) {
    const shift = around.theme === "light" ? -0.2 : 0.16;
    pen.strokeStyle = cssColour(colourOfShare(line.level / limit, around.theme, shift));
    pen.lineWidth = 1.1 * pixel;
    pen.setLineDash(line.level < 0 ? [4 * pixel, 3 * pixel] : []);
    tracePoints(pen, line.points, false);
    pen.stroke();
  }
  pen.restore();

  pen.lineWidth = pixel;
  pen.strokeStyle = around.ink;
  pen.globalAlpha = 0.55;
  tracePoints(pen, picture.outline, true);
  pen.stroke();
  pen.globalAlpha = 1;
  paintElectrodes(pen, picture, pixel, around);
  if (content.dipole) paintDipole(pen, picture.dipole, pixel, around);
  pen.restore();

  paintLetters(pen, width, height, unit, content, around);
}

/** @param {CanvasRenderingContext2D} pen @param {Picture} picture @param {number} pixel @param {import("./canvas.js").Surroundings} around */
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

/** An axis, not an arrow: a component's sign is arbitrary. @param {CanvasRenderingContext2D} pen @param {Picture["dipole"]} dipole @param {number} pixel @param {import("./canvas.js").Surroundings} around */
function paintDipole(pen, dipole, pixel, around) {
  const half = 22 * pixel;
  for (const [colour, extra] of /** @type {const} */ ([[around.paper, 3], [around.ink, 0]])) {
    pen.strokeStyle = colour;
    pen.fillStyle = colour;
    pen.lineWidth = (2 + extra) * pixel;
    pen.lineCap = "round";
    pen.beginPath();
    pen.moveTo(dipole.x - half * dipole.dx, -dipole.y + half * dipole.dy);
    pen.lineTo(dipole.x + half * dipole.dx, -dipole.y - half * dipole.dy);
    pen.stroke();
    pen.beginPath();
    pen.arc(dipole.x, -dipole.y, (4 + extra / 2) * pixel, 0, 2 * Math.PI);
    pen.fill();
  }
}

/**
 * @param {CanvasRenderingContext2D} pen
 * @param {number} width
 * @param {number} height
 * @param {number} unit
 * @param {DiscContent} content
 * @param {import("./canvas.js").Surroundings} around
 */
function paintLetters(pen, width, height, unit, content, around) {
  const { words, picture, role } = content;
  const middle = width / 2;
  const centre = height / 2;
  pen.font = `11px ${around.font}`;
  pen.textAlign = "center";
  pen.textBaseline = "middle";
  for (const [key, sign] of /** @type {const} */ ([["max", "+"], ["min", "\u2212"]])) {
    const electrode = picture.electrodes[picture.extremes[role][key]];
    if (electrode === undefined) continue;
    const x = middle + unit * electrode.x;
    const y = centre - unit * electrode.y;
    writeHaloed(pen, `${sign} ${electrode.label}`, x, y < centre ? y + 11 : y - 11, around);
  }
  const edge = Math.max(1, ...picture.rings.map((ring) => ring.radius));
  pen.strokeStyle = around.ink;
  pen.lineWidth = 1.5;
  pen.beginPath();
  pen.moveTo(middle, centre - unit * edge);
  pen.lineTo(middle, centre - unit * edge - 5);
  pen.stroke();
  pen.fillStyle = around.ink;
  pen.fillText(words.front, middle, centre - unit * edge - 11);
  pen.fillText(words.left, middle - unit * edge - 9, centre);
  pen.fillText(words.right, middle + unit * edge + 9, centre);
  pen.fillText(words.above, middle, centre + unit * edge + 10);
  if (content.stretched !== "") {
    pen.textAlign = "right";
    pen.fillText(content.stretched, width - 1, 8);
  }
}
