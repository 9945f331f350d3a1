/**
 * The equivalent dipole in the head, seen in parallel from any side: the model's shells as circles, electrodes on the
 * outermost, and letters on pegs that turn with the head. What is nearer covers what is farther, which is fainter.
 */

import { shrinkOf } from "./canvas.js";
import { paintRegion } from "./region.js";
import { letterFont, markDipole, markElectrodes, markPointed, shortLabel, writeHaloed } from "./marks.js";

/** @import { Surface, Surroundings } from "./canvas.js" */
/** @import { RegionMarks } from "./region.js" */

/** CSS pixels around the head for the letters. */
const HEAD_MARGIN = 34;
/** CSS pixels from the scalp to the end of a peg, from there to its letters, and half their height. */
const PEG_LENGTH = 5;
const LETTER_GAP = 3;
const HALF_LETTER = 5;
/** The narrowest canvas that holds head and letters. */
export const LEAST_WIDTH = 200;
/** Half of the dipole's line over the radius of the scalp, and the least of it in CSS pixels. */
const HALF_MOMENT = 0.2;
const LEAST_MOMENT = 17;
/** CSS pixels from a named electrode to the middle of its label, upwards. */
const LABEL_GAP = 9;
const FAR_ALPHA = 0.28;
const CIRCLE_STEPS = 96;

/**
 * Where the reader stands, in degrees: `turn` 0 behind, 90 at the left, 180 in front; `tilt` 90 above.
 * @typedef {{ turn: number, tilt: number }} Standpoint
 */

/** @typedef {"left" | "right" | "front" | "back"} Side */

/**
 * @typedef {object} HeadContent
 * @property {HeadFigure} figure
 * @property {DiscElectrode[]} electrodes
 * @property {number} pointed the electrode pointed at, or -1
 * @property {Standpoint} from
 * @property {{ side: Side, text: string }[]} letters
 * @property {string} seen written below
 * @property {number[]} [named] electrodes of the near side with their labels
 * @property {RegionMarks} [region] where the dipole may lie as well
 */

/** @type {Record<Side, number[]>} */
const PEGS = { left: [-1, 0, 0], right: [1, 0, 0], front: [0, 1, 0], back: [0, -1, 0] };

/** @param {number} degrees */
function radians(degrees) {
  return (degrees * Math.PI) / 180;
}

/**
 * A point of the head as seen: x to the right, y upwards, z towards the reader.
 * @param {Standpoint} from
 * @returns {(point: number[]) => { x: number, y: number, z: number }}
 */
export function seenFrom({ turn, tilt }) {
  const [sinTurn, cosTurn] = [Math.sin(radians(turn)), Math.cos(radians(turn))];
  const [sinTilt, cosTilt] = [Math.sin(radians(tilt)), Math.cos(radians(tilt))];
  return ([x, y, z]) => {
    const away = x * sinTurn + y * cosTurn;
    return {
      x: x * cosTurn - y * sinTurn,
      y: away * sinTilt + z * cosTilt,
      z: z * sinTilt - away * cosTilt,
    };
  };
}

/**
 * @param {number} width
 * @param {number} height
 */
export function layOutHead(width, height) {
  const radius = Math.max(1, Math.min(width, height) / 2 - HEAD_MARGIN);
  return { middle: width / 2, centre: height / 2, radius };
}

/**
 * The electrode at a point of the canvas, the nearer side first; -1 when none is within reach.
 * @param {HTMLCanvasElement} canvas
 * @param {HeadContent} content
 * @param {number} x CSS pixels from the canvas's corner
 * @param {number} y
 * @param {number} reach
 */
export function electrodeOnHead(canvas, { figure, from }, x, y, reach) {
  const shrink = shrinkOf(canvas, LEAST_WIDTH);
  const { middle, centre, radius } = layOutHead(shrink * canvas.clientWidth, shrink * canvas.clientHeight);
  const see = seenFrom(from);
  let best = -1;
  let least = Infinity;
  figure.electrodes.forEach((place, at) => {
    const seen = see(place);
    const distance = Math.hypot(middle + radius * seen.x - shrink * x, centre - radius * seen.y - shrink * y);
    const cost = distance + (seen.z < 0 ? reach : 0);
    if (distance <= reach && cost < least) {
      best = at;
      least = cost;
    }
  });
  return best;
}

/**
 * @param {Surface} surface no narrower than `LEAST_WIDTH`
 * @param {HeadContent} content
 * @param {Surroundings} around
 */
export function paintHead({ pen, width, height }, content, around) {
  const { figure, electrodes, pointed, letters } = content;
  const { middle, centre, radius } = layOutHead(width, height);
  const seen = seenFrom(content.from);
  /** @param {number[]} point */
  const place = (point) => {
    const { x, y, z } = seen(point);
    return { x: middle + radius * x, y: centre - radius * y, z };
  };
  pen.font = letterFont(around);
  pen.textAlign = "center";
  pen.textBaseline = "middle";

  const paintSide = (/** @type {boolean} */ near) => {
    paintCircles(pen, place, near, around);
    for (const letter of letters) paintPeg(pen, place, radius, letter, near, width, around);
    pen.globalAlpha = near ? 1 : FAR_ALPHA;
    const placed = figure.electrodes.map((point, at) => ({ ...place(point), used: electrodes[at].used }));
    markElectrodes(pen, placed.filter(({ z }) => z >= 0 === near), 1.6, around);
    pen.globalAlpha = 1;
  };

  paintShells(pen, middle, centre, radius, figure, around);
  paintSide(false);
  if (content.region) paintRegion(pen, place, content.region, around);
  paintMoment(pen, place, radius, figure, around);
  paintSide(true);
  for (const at of content.named ?? []) {
    const { x, y, z } = place(figure.electrodes[at]);
    if (z < -1e-9) continue;
    // Towards the middle, and above what stands there.
    const label = shortLabel(electrodes[at].label);
    const [dx, dy] = [middle - x, centre - y];
    const distance = Math.hypot(dx, dy);
    const away = distance < LABEL_GAP ? [0, -1] : [dx / distance, dy / distance];
    const across = LABEL_GAP / 2 + pen.measureText(label).width / 2;
    writeHaloed(pen, label, x + across * away[0], y + LABEL_GAP * away[1], width, around);
  }

  pen.fillStyle = around.ink;
  writeHaloed(pen, content.seen, middle, height - 7, width, around);
  const point = figure.electrodes[pointed];
  if (point === undefined) return;
  const { x, y } = place(point);
  markPointed(pen, x, y, electrodes[pointed].label, width, around);
}

/**
 * Spheres are circles from every side.
 * @param {CanvasRenderingContext2D} pen
 * @param {number} middle
 * @param {number} centre
 * @param {number} radius
 * @param {HeadFigure} figure
 * @param {Surroundings} around
 */
export function paintShells(pen, middle, centre, radius, { shells }, around) {
  const outermost = Math.max(...shells.map((shell) => shell.radius));
  const innermost = Math.min(...shells.map((shell) => shell.radius));
  pen.strokeStyle = around.ink;
  pen.fillStyle = around.ink;
  pen.lineWidth = 1;
  for (const shell of shells) {
    pen.beginPath();
    pen.arc(middle, centre, radius * shell.radius, 0, 2 * Math.PI);
    if (shell.radius === innermost) {
      pen.globalAlpha = 0.045;
      pen.fill();
    }
    pen.globalAlpha = shell.radius === outermost ? 0.5 : 0.25;
    pen.stroke();
  }
  pen.globalAlpha = 1;
}

/**
 * The three great circles through front, left and top: what tells a turned sphere from another.
 * @param {CanvasRenderingContext2D} pen
 * @param {(point: number[]) => { x: number, y: number, z: number }} place
 * @param {boolean} near
 * @param {Surroundings} around
 */
export function paintCircles(pen, place, near, around) {
  pen.strokeStyle = around.ink;
  pen.lineWidth = 1;
  pen.globalAlpha = near ? 0.2 : 0.1;
  pen.beginPath();
  for (const circle of [0, 1, 2]) {
    let drawing = false;
    for (let step = 0; step <= CIRCLE_STEPS; step++) {
      const angle = (2 * Math.PI * step) / CIRCLE_STEPS;
      const point = [0, 0, 0];
      point[circle] = Math.cos(angle);
      point[(circle + 1) % 3] = Math.sin(angle);
      const { x, y, z } = place(point);
      // A circle seen from its edge is a line, drawn once.
      const visible = near ? z > -1e-9 : z < -1e-9;
      if (visible && drawing) pen.lineTo(x, y);
      else if (visible) pen.moveTo(x, y);
      drawing = visible;
    }
  }
  pen.stroke();
  pen.globalAlpha = 1;
}

/**
 * @param {CanvasRenderingContext2D} pen
 * @param {(point: number[]) => { x: number, y: number, z: number }} place
 * @param {number} radius
 * @param {{ side: Side, text: string }} letter
 * @param {boolean} near
 * @param {number} width
 * @param {Surroundings} around
 */
export function paintPeg(pen, place, radius, { side, text }, near, width, around) {
  /** @param {number} pixels beyond the scalp */
  const beyond = (pixels) => place(PEGS[side].map((part) => part * (1 + pixels / radius)));
  const foot = beyond(0);
  if (foot.z >= -1e-9 !== near) return;
  const tip = beyond(PEG_LENGTH);
  // Words lie along or across their peg; a peg that points at the reader is short, and so is its distance.
  const across = Math.abs(tip.x - foot.x) / PEG_LENGTH;
  const along = Math.abs(tip.y - foot.y) / PEG_LENGTH;
  const letter = beyond(PEG_LENGTH + LETTER_GAP + across * (pen.measureText(text).width / 2) + along * HALF_LETTER);
  pen.globalAlpha = near ? 1 : 0.6;
  pen.strokeStyle = around.ink;
  pen.lineWidth = 1.5;
  pen.beginPath();
  pen.moveTo(foot.x, foot.y);
  pen.lineTo(tip.x, tip.y);
  pen.stroke();
  writeHaloed(pen, text, letter.x, letter.y, width, around);
  pen.globalAlpha = 1;
}

/**
 * The dipole, and a dotted line from it straight out to the scalp.
 * @param {CanvasRenderingContext2D} pen
 * @param {(point: number[]) => { x: number, y: number, z: number }} place
 * @param {number} radius
 * @param {HeadFigure} figure
 * @param {Surroundings} around
 */
function paintMoment(pen, place, radius, { dipole, axis }, around) {
  if (dipole === null) return;
  const { position, direction } = dipole;
  const { x, y } = place(position);
  const distance = Math.hypot(...position);
  if (distance > 0.02) {
    const scalp = place(position.map((part) => part / distance));
    pen.strokeStyle = around.ink;
    pen.lineWidth = 1;
    pen.globalAlpha = 0.75;
    pen.setLineDash([1.5, 2.5]);
    pen.beginPath();
    pen.moveTo(x, y);
    pen.lineTo(scalp.x, scalp.y);
    pen.stroke();
    pen.setLineDash([]);
    pen.globalAlpha = 1;
  }
  const half = Math.max(HALF_MOMENT, LEAST_MOMENT / radius);
  const end = place(position.map((part, at) => part + half * direction[at]));
  const towards = end.z - place(position).z;
  markDipole(pen, x, y, { dx: end.x - x, dy: end.y - y, towards, axis }, around);
}
