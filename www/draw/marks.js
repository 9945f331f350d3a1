/** Marks that the maps and the views of the head share; all lengths are CSS pixels. */

import { harmless } from "../text/figures.js";

/** @import { Surroundings } from "./canvas.js" */

/** Letters of a label that are shown. */
const MOST_LETTERS = 8;
const LABEL_DISTANCE = 13;
/** Below this length on the paper an arrow points at the reader or away. */
const SHORTEST_ARROW = 5;

/** A label that leaves room for the letters around a picture. @param {string} label */
export function shortLabel(label) {
  const letters = [...harmless(label)];
  return letters.length > MOST_LETTERS ? `${letters.slice(0, MOST_LETTERS - 1).join("")}…` : letters.join("");
}

/** @param {Surroundings} around */
export function letterFont(around) {
  return `11px ${around.font}`;
}

/**
 * Text with a halo of paper, readable on any value, and moved aside or condensed where it would leave the canvas.
 * @param {CanvasRenderingContext2D} pen
 * @param {string} text
 * @param {number} x
 * @param {number} y
 * @param {number} width of the canvas
 * @param {Surroundings} around
 */
export function writeHaloed(pen, text, x, y, width, around) {
  const half = pen.measureText(text).width / 2 + 2;
  const inside = half > width / 2 ? width / 2 : Math.min(width - half, Math.max(half, x));
  pen.lineWidth = 3;
  pen.lineJoin = "round";
  pen.strokeStyle = around.paper;
  pen.strokeText(text, inside, y, width);
  pen.fillStyle = around.ink;
  pen.fillText(text, inside, y, width);
}

/**
 * Text in as many lines as its room asks for.
 * @param {CanvasRenderingContext2D} pen
 * @param {string} text
 * @param {number} x
 * @param {number} y of the first line
 * @param {number} room
 * @param {number} step from line to line
 * @returns {number} how many lines
 */
export function writeWrapped(pen, text, x, y, room, step) {
  const lines = [""];
  for (const next of text.split(" ")) {
    const longer = `${lines[lines.length - 1]} ${next}`.trim();
    if (pen.measureText(longer).width <= room) lines[lines.length - 1] = longer;
    else lines.push(next);
  }
  lines.forEach((line, at) => pen.fillText(line, x, y + step * at));
  return lines.length;
}

/** Circles of one size as one path. @param {CanvasRenderingContext2D} pen @param {{ x: number, y: number }[]} places @param {number} radius */
export function traceCircles(pen, places, radius) {
  pen.beginPath();
  for (const { x, y } of places) {
    pen.moveTo(x + radius, y);
    pen.arc(x, y, radius, 0, 2 * Math.PI);
  }
}

/**
 * @param {CanvasRenderingContext2D} pen
 * @param {number} x
 * @param {number} y
 * @param {number} radius
 */
function traceCircle(pen, x, y, radius) {
  pen.beginPath();
  pen.arc(x, y, radius, 0, 2 * Math.PI);
}

/**
 * Dots; crossed and hollow where the fit does without. Those of one kind are one path.
 * @param {CanvasRenderingContext2D} pen
 * @param {{ x: number, y: number, used: boolean }[]} electrodes
 * @param {number} radius
 * @param {Surroundings} around
 */
export function markElectrodes(pen, electrodes, radius, around) {
  const [used, unused] = [true, false].map((one) => electrodes.filter((electrode) => electrode.used === one));
  if (used.length > 0) {
    pen.fillStyle = around.ink;
    traceCircles(pen, used, radius);
    pen.fill();
  }
  if (unused.length === 0) return;
  const arm = 2.4;
  pen.fillStyle = around.paper;
  pen.strokeStyle = around.ink;
  pen.lineWidth = 1;
  traceCircles(pen, unused, 3.8);
  pen.fill();
  for (const { x, y } of unused) {
    pen.moveTo(x - arm, y - arm);
    pen.lineTo(x + arm, y + arm);
    pen.moveTo(x + arm, y - arm);
    pen.lineTo(x - arm, y + arm);
  }
  pen.stroke();
}

/**
 * The electrode that is pointed at, ringed; its label stands beside it unless something else says it.
 * @param {CanvasRenderingContext2D} pen
 * @param {number} x
 * @param {number} y
 * @param {string} label or empty
 * @param {number} width of the canvas
 * @param {Surroundings} around
 * @param {{ x: number, y: number }[]} [taken] middles of labels that stand already
 */
export function markPointed(pen, x, y, label, width, around, taken = []) {
  for (const [colour, line] of /** @type {const} */ ([
    [around.paper, 5],
    [around.ink, 2],
  ])) {
    pen.strokeStyle = colour;
    pen.lineWidth = line;
    traceCircle(pen, x, y, 6.5);
    pen.stroke();
  }
  if (label === "") return;
  pen.font = `600 ${letterFont(around)}`;
  const above = y - LABEL_DISTANCE - 3;
  const free = above > 8 && taken.every((one) => Math.abs(one.y - above) > 12 || Math.abs(one.x - x) > 44);
  const beside = free ? above : y + LABEL_DISTANCE + 3;
  writeHaloed(pen, shortLabel(label), x, beside, width, around);
  pen.font = letterFont(around);
}

/**
 * The dipole at (x, y). As an axis it is the same towards both ends, for a component's sign is arbitrary; as an arrow
 * it runs from the negative to the positive pole.
 * @param {CanvasRenderingContext2D} pen
 * @param {number} x
 * @param {number} y
 * @param {{ dx: number, dy: number, towards: number, axis: boolean }} moment half of it on the paper, and how much
 *   of the direction points at the reader
 * @param {Surroundings} around
 */
export function markDipole(pen, x, y, { dx, dy, towards, axis }, around) {
  const length = Math.hypot(dx, dy);
  const upright = !axis && length < SHORTEST_ARROW;
  const head = axis || upright ? 0 : Math.min(9, 1.2 * length);
  const [ux, uy] = length > 0 ? [dx / length, dy / length] : [0, 0];
  for (const [colour, halo] of /** @type {const} */ ([
    [around.paper, 1.5],
    [around.ink, 0],
  ])) {
    pen.strokeStyle = colour;
    pen.fillStyle = colour;
    pen.lineCap = "round";
    pen.lineJoin = "round";
    pen.lineWidth = 2 + 2 * halo;
    pen.beginPath();
    pen.moveTo(x - dx, y - dy);
    pen.lineTo(x + dx - 0.7 * head * ux, y + dy - 0.7 * head * uy);
    pen.stroke();
    if (head > 0) {
      pen.lineWidth = 0.5 + 2 * halo;
      pen.beginPath();
      pen.moveTo(x + dx, y + dy);
      pen.lineTo(x + dx - head * ux + 0.42 * head * uy, y + dy - head * uy - 0.42 * head * ux);
      pen.lineTo(x + dx - head * ux - 0.42 * head * uy, y + dy - head * uy + 0.42 * head * ux);
      pen.closePath();
      pen.fill();
      pen.stroke();
    }
    traceCircle(pen, x, y, (upright ? 6 : 4) + halo);
    pen.fill();
  }
  if (upright) paintUpright(pen, x, y, towards > 0, around);
  pen.lineCap = "butt";
}

/**
 * An arrow seen from its end: a point when it comes, a cross when it goes.
 * @param {CanvasRenderingContext2D} pen
 * @param {number} x
 * @param {number} y
 * @param {boolean} comes
 * @param {Surroundings} around
 */
function paintUpright(pen, x, y, comes, around) {
  pen.fillStyle = around.paper;
  pen.strokeStyle = around.paper;
  traceCircle(pen, x, y, 4.5);
  pen.fill();
  pen.fillStyle = around.ink;
  pen.strokeStyle = around.ink;
  pen.lineWidth = 1.5;
  if (comes) {
    traceCircle(pen, x, y, 2);
    pen.fill();
    return;
  }
  pen.beginPath();
  pen.moveTo(x - 3, y - 3);
  pen.lineTo(x + 3, y + 3);
  pen.moveTo(x + 3, y - 3);
  pen.lineTo(x - 3, y + 3);
  pen.stroke();
}
