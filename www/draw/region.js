/** Where a dipole may lie as well: refitted positions and the outlines of ellipsoids, in a view of the head; marks of verdicts. */

import { traceCircles } from "./marks.js";
import { svgElement } from "./pen.js";
import { seriesColour } from "./series.js";

/** @import { Surroundings } from "./canvas.js" */

/**
 * `errors` under drawn errors, `noise` if the residual were independent noise, `repeats` of one map, `others` in place of the one dipole.
 * @typedef {{ cloud: number[][], errors: Ellipsoid | null, noise: Ellipsoid | null, repeats: number[][], others: OtherDipole[] }} RegionMarks
 * @typedef {{ kind: OtherKind, position: number[], direction: number[] }} OtherDipole
 * @typedef {Exclude<ExplanationKind, "single"> | "hand"} OtherKind
 */

const OUTLINE_STEPS = 72;
const NOISE_DASH = [4, 3];
/** Half of another dipole's line over the radius of the scalp. */
const OTHER_MOMENT = 0.17;
/** Corners of the shape at its place; the hand's is round. @type {Record<OtherKind, number>} */
const OTHER_CORNERS = { "second-minimum": 3, "mirrored-pair": 4, "two-dipoles": 6, hand: 24 };

/**
 * The outline of an ellipsoid seen in parallel: of the covariance only the part that lies across the line of sight counts.
 * @param {Ellipsoid} ellipsoid
 * @param {(point: number[]) => { x: number, y: number }} place affine
 */
export function outlineOf({ centre, covariance: [xx, xy, xz, yy, yz, zz], scale }, place) {
  const origin = place([0, 0, 0]);
  const axes = [[1, 0, 0], [0, 1, 0], [0, 0, 1]].map(place).map(({ x, y }) => ({ x: x - origin.x, y: y - origin.y }));
  const rows = [[xx, xy, xz], [xy, yy, yz], [xz, yz, zz]];
  /** @param {"x" | "y"} one @param {"x" | "y"} other */
  const seen = (one, other) =>
    rows.reduce((sum, row, i) => sum + row.reduce((part, value, k) => part + axes[i][one] * value * axes[k][other], 0), 0);
  const across = Math.sqrt(Math.max(0, seen("x", "x")));
  const slant = across > 0 ? seen("x", "y") / across : 0;
  const down = Math.sqrt(Math.max(0, seen("y", "y") - slant * slant));
  const middle = place(centre);
  return Array.from({ length: OUTLINE_STEPS }, (_, step) => {
    const angle = (2 * Math.PI * step) / OUTLINE_STEPS;
    const [cos, sin] = [scale * Math.cos(angle), scale * Math.sin(angle)];
    return { x: middle.x + across * cos, y: middle.y + slant * cos + down * sin };
  });
}

/** @param {CanvasRenderingContext2D} pen @param {{ x: number, y: number }[]} corners @param {string} colour @param {number[]} dash @param {Surroundings} around */
export function strokeOutline(pen, corners, colour, dash, around) {
  for (const [ink, width, dashes] of /** @type {[string, number, number[]][]} */ ([[around.paper, 3.5, []], [colour, 1.75, dash]])) {
    pen.beginPath();
    for (const { x, y } of corners) pen.lineTo(x, y);
    pen.closePath();
    pen.strokeStyle = ink;
    pen.lineWidth = width;
    pen.globalAlpha = ink === around.paper ? 0.6 : 1;
    pen.setLineDash(dashes);
    pen.stroke();
  }
  pen.setLineDash([]);
}

/** @param {CanvasRenderingContext2D} pen @param {number} x @param {number} y @param {Surroundings} around */
function strokeDiamond(pen, x, y, around) {
  pen.beginPath();
  for (const [dx, dy] of [[0, -3.5], [3.5, 0], [0, 3.5], [-3.5, 0]]) pen.lineTo(x + dx, y + dy);
  pen.closePath();
  pen.strokeStyle = around.ink;
  pen.lineWidth = 1.25;
  pen.stroke();
}

/**
 * A dipole that is not the best fit: hollow.
 * @param {CanvasRenderingContext2D} pen
 * @param {(point: number[]) => { x: number, y: number }} place
 * @param {OtherDipole} dipole
 * @param {Surroundings} around
 */
export function strokeOther(pen, place, { kind, position, direction }, around) {
  const corners = OTHER_CORNERS[kind];
  const foot = place(position);
  const ends = [-OTHER_MOMENT, OTHER_MOMENT].map((half) => place(position.map((part, axis) => part + half * direction[axis])));
  const start = Math.PI / (corners === 4 ? 4 : 2);
  for (const [ink, width] of /** @type {[string, number][]} */ ([[around.paper, 4.5], [around.ink, 1.75]])) {
    pen.strokeStyle = ink;
    pen.lineWidth = width;
    pen.setLineDash(ink === around.paper ? [] : [4, 2]);
    pen.beginPath();
    for (const { x, y } of ends) pen.lineTo(x, y);
    pen.stroke();
    pen.setLineDash([]);
    pen.fillStyle = around.paper;
    pen.beginPath();
    for (let at = 0; at < corners; at++) {
      const angle = start + (2 * Math.PI * at) / corners;
      pen.lineTo(foot.x + 5 * Math.cos(angle), foot.y - 5 * Math.sin(angle));
    }
    pen.closePath();
    pen.stroke();
    pen.fill();
  }
}

/**
 * @param {CanvasRenderingContext2D} pen
 * @param {(point: number[]) => { x: number, y: number }} place
 * @param {RegionMarks} marks
 * @param {Surroundings} around
 */
export function paintRegion(pen, place, { cloud, errors, noise, repeats, others }, around) {
  const [colour, other] = [0, 1].map((at) => seriesColour(at, around.theme));
  pen.fillStyle = colour;
  pen.globalAlpha = 0.5;
  traceCircles(pen, cloud.map(place), 1.3);
  pen.fill();
  pen.globalAlpha = 1;
  if (errors !== null) strokeOutline(pen, outlineOf(errors, place), colour, [], around);
  if (noise !== null) strokeOutline(pen, outlineOf(noise, place), other, NOISE_DASH, around);
  for (const point of repeats) {
    const { x, y } = place(point);
    strokeDiamond(pen, x, y, around);
  }
  for (const other of others) strokeOther(pen, place, other, around);
}

/** Marks as a legend shows them, 26 by 10: a flat ellipse seen from above. @param {Exclude<keyof RegionMarks, "others"> | OtherKind} kind @returns {RegionMarks} */
export function legendMarks(kind) {
  const flat = { centre: [13, 5, 0], covariance: [120, 0, 0, 12, 0, 0], scale: 1 };
  return {
    cloud: kind === "cloud" ? [[5, 4], [10, 7], [13, 3], [17, 6], [22, 5]] : [],
    errors: kind === "errors" ? flat : null,
    noise: kind === "noise" ? flat : null,
    repeats: kind === "repeats" ? [[7, 5], [19, 5]] : [],
    others: kind in OTHER_CORNERS ? [{ kind: /** @type {OtherKind} */ (kind), position: [13, 5, 0], direction: [64, 0, 0] }] : [],
  };
}

/** Outlines in a square of 16, and what of it is filled. @type {Record<VerdictWord, [string, string]>} */
const VERDICT_MARKS = {
  dipolar: ["", "M2 8a6 6 0 1 0 12 0a6 6 0 1 0-12 0Z"],
  undecided: ["M2 8a6 6 0 1 0 12 0a6 6 0 1 0-12 0Z", "M8 2a6 6 0 0 0 0 12Z"],
  paired: ["M8 1V15", "M1.5 8a2.5 2.5 0 1 0 5 0a2.5 2.5 0 1 0-5 0ZM9.5 8a2.5 2.5 0 1 0 5 0a2.5 2.5 0 1 0-5 0Z"],
  "not-dipolar": ["M2 8a6 6 0 1 0 12 0a6 6 0 1 0-12 0Z", ""],
  edge: ["M14 1V15", "M4 8a4.5 4.5 0 1 0 9 0a4.5 4.5 0 1 0-9 0Z"],
  "below-the-brain": ["M1 3H15", "M3.5 10a4.5 4.5 0 1 0 9 0a4.5 4.5 0 1 0-9 0Z"],
  "lone-electrode": ["M2 8a6 6 0 1 0 12 0a6 6 0 1 0-12 0Z", "M6 8a2 2 0 1 0 4 0a2 2 0 1 0-4 0Z"],
};

/** A verdict by its shape, in the colour of the words beside it. @param {VerdictWord} verdict */
export function verdictMark(verdict) {
  const [line, area] = VERDICT_MARKS[verdict];
  const mark = svgElement("svg", { viewBox: "0 0 16 16", class: "verdict-mark", "aria-hidden": "true" });
  mark.append(
    svgElement("path", { d: area, fill: "currentcolor" }),
    svgElement("path", { d: line, fill: "none", stroke: "currentcolor", "stroke-width": 1.75 }),
  );
  return mark;
}
