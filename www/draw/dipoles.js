/** Many dipoles in one head, and what their colours mean. */

import { paintSteps } from "./bar.js";
import { shrinkOf } from "./canvas.js";
import { levelText, strokeLine } from "./curves.js";
import { layOutHead, LEAST_WIDTH, paintCircles, paintPeg, paintShells, seenFrom } from "./head.js";
import { letterFont, writeHaloed } from "./marks.js";
import { outlineOf, strokeOutline } from "./region.js";
import { rvColour, RV_MOST, seriesColour, seriesDash } from "./series.js";
import { mostText } from "../text/figures.js";

/** @import { Surface, Surroundings } from "./canvas.js" */
/** @import { Side, Standpoint } from "./head.js" */

/** Half of a dipole's line over the radius of the scalp. */
const HALF_STROKE = 0.085;
const DOT = 2.4;
const FAINT_ALPHA = 0.18;
/** Steps of colour in the legend. */
const LEGEND_STEPS = 50;

/**
 * Position in scalp radii; a line to both ends where the sign is arbitrary, otherwise towards the positive pole alone.
 * `bold`: a mean, or one position for many maps, over all others and with a text of its own.
 * @typedef {{ position: number[], direction: number[], axis: boolean, rv: number, at: number, faint: boolean, bold?: string }} ManyDipole
 */

/**
 * @typedef {object} DipolesContent
 * @property {ManyDipole[]} dipoles
 * @property {number} chosen
 * @property {boolean} byRv or by decomposition
 * @property {{ radius: number }[]} shells
 * @property {Standpoint} from
 * @property {{ side: Side, text: string }[]} letters
 * @property {string} seen
 * @property {boolean} [joined] one after the other, as they were over time
 * @property {{ ellipsoid: Ellipsoid, at: number }[]} [spreads]
 */

/** @param {ManyDipole} dipole @param {boolean} byRv @param {Surroundings} around */
function dipoleColour({ rv, at }, byRv, { theme }) {
  return byRv ? rvColour(rv, theme) : seriesColour(at, theme);
}

/**
 * @param {Surface} surface
 * @param {DipolesContent} content
 * @param {Surroundings} around
 */
export function paintDipoles({ pen, width, height }, content, around) {
  const { dipoles, chosen, byRv, letters } = content;
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
  const shells = content.shells.map((shell) => ({ ...shell, tissue: "" }));
  paintShells(pen, middle, centre, radius, { shells, electrodes: [], dipole: null, axis: true }, around);
  for (const near of [false, true]) {
    paintCircles(pen, place, near, around);
    for (const letter of letters) paintPeg(pen, place, radius, letter, near, width, around);
  }
  const order = dipoles.map((dipole, at) => ({ dipole, at, depth: seen(dipole.position).z }));
  // The nearer lies over the farther, what counts over what is faint, and the chosen one over all.
  const bold = (/** @type {{ dipole: ManyDipole }} */ { dipole }) => Number(dipole.bold !== undefined);
  order.sort((a, b) => bold(a) - bold(b) || Number(a.at === chosen) - Number(b.at === chosen) || Number(b.dipole.faint) - Number(a.dipole.faint) || a.depth - b.depth);
  if (content.joined) {
    pen.beginPath();
    for (const { position } of dipoles.filter(({ faint, bold: own }) => !faint && own === undefined)) {
      const { x, y } = place(position);
      pen.lineTo(x, y);
    }
    strokeLine(pen, around.ink, 0, 1, 0.5);
  }
  for (const { ellipsoid, at } of content.spreads ?? []) {
    strokeOutline(pen, outlineOf(ellipsoid, place), seriesColour(at, around.theme), seriesDash(at), around);
  }
  pen.lineCap = "round";
  for (const { dipole, at } of order) {
    const foot = place(dipole.position);
    const end = place(dipole.position.map((part, k) => part + HALF_STROKE * dipole.direction[k]));
    const [dx, dy] = [end.x - foot.x, end.y - foot.y];
    const colour = dipoleColour(dipole, byRv, around);
    const layers = /** @type {[string, number, number][]} */ (
      at === chosen || dipole.bold !== undefined
        ? [[around.ink, 7.5, DOT + 4], [around.paper, 5, DOT + 2.5], [colour, 2.5, DOT + 1]]
        : dipole.faint
          ? [[colour, 2, DOT]]
          : [[around.paper, 3.4, DOT + 0.8], [colour, 2, DOT]]
    );
    pen.globalAlpha = dipole.faint && at !== chosen ? FAINT_ALPHA : 1;
    for (const [ink, line, spot] of layers) {
      pen.strokeStyle = ink;
      pen.fillStyle = ink;
      pen.lineWidth = line;
      pen.beginPath();
      pen.moveTo(dipole.axis ? foot.x - dx : foot.x, dipole.axis ? foot.y - dy : foot.y);
      pen.lineTo(foot.x + dx, foot.y + dy);
      pen.stroke();
      pen.beginPath();
      pen.arc(foot.x, foot.y, spot, 0, 2 * Math.PI);
      pen.fill();
    }
    if (dipole.bold) writeHaloed(pen, dipole.bold, foot.x + 12, foot.y - 10, width, around);
  }
  pen.globalAlpha = 1;
  pen.lineCap = "butt";
  pen.fillStyle = around.ink;
  writeHaloed(pen, content.seen, middle, height - 7, width, around);
}

/**
 * The dipole nearest to a point of the canvas, -1 when none is within reach.
 * @param {HTMLCanvasElement} canvas
 * @param {Pick<DipolesContent, "dipoles" | "from">} content
 * @param {number} x CSS pixels from the canvas's corner
 * @param {number} y
 * @param {number} reach
 */
export function dipoleOnHead(canvas, { dipoles, from }, x, y, reach) {
  const shrink = shrinkOf(canvas, LEAST_WIDTH);
  const { middle, centre, radius } = layOutHead(shrink * canvas.clientWidth, shrink * canvas.clientHeight);
  const see = seenFrom(from);
  let best = -1;
  let least = shrink * reach;
  dipoles.forEach(({ position, faint }, at) => {
    const seen = see(position);
    const distance = Math.hypot(middle + radius * seen.x - shrink * x, centre - radius * seen.y - shrink * y);
    // Of two at one place the nearer one, and not the faint one.
    const cost = distance - seen.z + (faint ? 4 : 0);
    if (distance <= shrink * reach && cost < least) {
      best = at;
      least = cost;
    }
  });
  return best;
}

/**
 * The colours of residual variance with the threshold, or those of the decompositions with their names.
 * @param {CanvasRenderingContext2D} pen
 * @param {number} width
 * @param {{ byRv: boolean, threshold: number, names: { name: string, at: number }[], words: string }} content
 * @param {Surroundings} around
 * @returns {number} its height
 */
export function paintDipoleLegend(pen, width, { byRv, threshold, names, words }, around) {
  pen.font = letterFont(around);
  pen.textBaseline = "middle";
  pen.textAlign = "start";
  pen.fillStyle = around.ink;
  if (!byRv) {
    let [x, y] = [6, 8];
    for (const { name, at } of names) {
      const wide = pen.measureText(name).width + 34;
      if (x > 6 && x + wide > width) [x, y] = [6, y + 18];
      pen.fillStyle = seriesColour(at, around.theme);
      pen.beginPath();
      pen.arc(x + 5, y, 4.5, 0, 2 * Math.PI);
      pen.fill();
      pen.fillStyle = around.ink;
      pen.fillText(name, x + 14, y, width - 20);
      x += wide;
    }
    return y + 12;
  }
  const [left, right] = [6, Math.min(width - 6, 266)];
  pen.fillText(words, left, 7, width - 12);
  paintSteps(pen, { x: left, y: 18, width: right - left, height: 10 }, (share) => rvColour(RV_MOST * share, around.theme), LEGEND_STEPS);
  pen.fillStyle = around.ink;
  pen.strokeStyle = around.ink;
  pen.lineWidth = 1.2;
  /** @type {[number, string][]} */
  const ticks = [[0, "0"], [RV_MOST, mostText(levelText(RV_MOST))]];
  if (threshold > 0.03 && threshold < 0.75 * RV_MOST) ticks.splice(1, 0, [threshold, levelText(threshold)]);
  for (const [rv, text] of ticks) {
    const x = left + ((right - left) * rv) / RV_MOST;
    pen.beginPath();
    pen.moveTo(x, 16);
    pen.lineTo(x, 31);
    pen.stroke();
    pen.textAlign = rv === 0 ? "start" : rv === RV_MOST ? "right" : "center";
    pen.fillText(text, x, 38);
  }
  return 48;
}
