/**
 * The share of maps whose residual variance is at most x, as step curves with a threshold; and mutual-information
 * reduction against that share, as named points. Lines differ by dash and points by shape as well as by colour.
 */

import { letterFont, writeHaloed } from "./marks.js";
import { textWidth } from "./pen.js";
import { seriesColour, seriesDash } from "./series.js";
import { enteredText, NO_BREAK, percentText } from "../text/figures.js";

/** @import { Surface, Surroundings } from "./canvas.js" */

/** CSS pixels around the plot. */
const AROUND_PLOT = { left: 46, top: 40, right: 14, bottom: 42 };
/** From this width on names stand beside the plot, in a column of no more than this share; lines of names are so high. */
const WIDE = 460;
const NAMES_SHARE = 0.4;
const NAME_LINE = 16;
const SWATCH = 26;
const LEAST_LOG = [0.01, 0.005, 0.001];
const LOG_TICKS = [0.001, 0.002, 0.005, 0.01, 0.02, 0.05, 0.1, 0.2, 0.5, 1];

/**
 * A decomposition, from each residual variance on its share; or the mean of several of one name, told at points that a
 * smooth line joins.
 * @typedef {object} ShareLine
 * @property {string} name
 * @property {number} at gives colour and dash
 * @property {number[]} rv rising
 * @property {number[]} share
 * @property {number[] | null} low ends of the band
 * @property {number[] | null} high
 * @property {boolean} steps
 */

/**
 * @typedef {object} SharesContent
 * @property {ShareLine[]} lines
 * @property {boolean} logarithmic
 * @property {number} most where the axis ends
 * @property {number} threshold
 * @property {number | null} pointed a residual variance that is pointed at
 * @property {{ x: string, y: string }} words
 * @property {ShareLine[]} [behind] reference populations: thin beside others, in colours where they are alone; named where they run
 * @property {string} [told] what is written at the threshold in place of it
 */

/** @typedef {{ left: number, right: number, top: number, bottom: number, x: (rv: number) => number, y: (share: number) => number, rv: (x: number) => number, least: number }} SharePlot */

/** A threshold, with no more digits than it was given. @param {number} rv */
export function levelText(rv) {
  return `${enteredText(100 * rv)}${NO_BREAK}%`;
}

/** A line's share at x. @param {ShareLine} line @param {number} x @param {number[]} [values] of the line, other than its shares */
export function shareAt({ rv, share, steps }, x, values = share) {
  let [low, high] = [0, rv.length];
  while (low < high) {
    const middle = (low + high) >> 1;
    if (rv[middle] <= x) low = middle + 1;
    else high = middle;
  }
  if (low === 0) return 0;
  const before = values[low - 1];
  if (steps || low === rv.length) return before;
  return before + ((values[low] - before) * (x - rv[low - 1])) / (rv[low] - rv[low - 1]);
}

/** How high a figure of this width is. @param {number} width @param {number} count of lines */
export function sharesHeight(width, count) {
  const plot = Math.max(230, Math.min(330, 0.62 * width));
  if (width >= WIDE || count === 0) return Math.max(plot, count * NAME_LINE) + AROUND_PLOT.top + AROUND_PLOT.bottom;
  return plot + AROUND_PLOT.top + AROUND_PLOT.bottom + count * NAME_LINE + 4;
}

/**
 * @param {number} width
 * @param {number} height
 * @param {Pick<SharesContent, "lines" | "logarithmic" | "most" | "behind">} content
 * @param {Surroundings} around
 * @returns {SharePlot}
 */
export function layOutShares(width, height, { lines, logarithmic, most, behind = [] }, around) {
  const wide = width >= WIDE && lines.length > 0;
  const longest = Math.max(...lines.map(({ name }) => textWidth(name, letterFont(around))));
  const names = Math.min(NAMES_SHARE * width, longest + 16 + SWATCH + 6 + 60);
  const right = width - (wide ? names : AROUND_PLOT.right);
  const bottom = height - AROUND_PLOT.bottom - (wide || lines.length === 0 ? 0 : lines.length * NAME_LINE + 4);
  const { left, top } = AROUND_PLOT;
  const smallest = Math.min(...[...lines, ...behind].map(({ rv, share }) => rv[Math.max(0, share.findIndex((one) => one > 0))] ?? 1));
  const least = logarithmic ? (LEAST_LOG.find((one) => one <= smallest) ?? LEAST_LOG[LEAST_LOG.length - 1]) : 0;
  const span = Math.log(most / least);
  /** @param {number} rv */
  const part = (rv) => (logarithmic ? Math.log(Math.max(rv, least) / least) / span : rv / most);
  return {
    left,
    right,
    top,
    bottom,
    least,
    x: (rv) => left + (right - left) * part(rv),
    y: (share) => bottom - (bottom - top) * share,
    rv: (x) => {
      const share = Math.min(1, Math.max(0, (x - left) / (right - left)));
      return logarithmic ? least * Math.exp(share * span) : share * most;
    },
  };
}

/**
 * @param {Surface} surface
 * @param {SharesContent} content
 * @param {Surroundings} around
 */
export function paintShares({ pen, width, height }, content, around) {
  const { lines, logarithmic, most, threshold, pointed, words, behind = [], told } = content;
  const plot = layOutShares(width, height, content, around);
  const linear = most > 0.5 ? 0.2 : most > 0.3 ? 0.1 : 0.05;
  const ticks = logarithmic
    ? LOG_TICKS.filter((tick) => tick >= plot.least && tick <= most)
    : Array.from({ length: Math.round(most / linear) + 1 }, (_, k) => k * linear);
  pen.font = letterFont(around);
  paintAxes(pen, plot, { across: ticks.map((tick) => [plot.x(tick), enteredText(100 * tick)]), words }, around);

  const alone = lines.length === 0;
  for (const line of behind) {
    pen.beginPath();
    traceLine(pen, plot, line, line.share, most);
    if (alone) strokeSeries(pen, line.at, 2, around);
    else strokeLine(pen, around.ink, line.at, 1, 0.6);
  }
  lines.forEach((line) => paintBand(pen, plot, line, most, around));
  // The first decomposition lies on top.
  for (const line of [...lines].reverse()) {
    pen.beginPath();
    traceLine(pen, plot, line, line.share, most);
    strokeSeries(pen, line.at, lines.length > 8 ? 1.5 : 2, around);
  }
  for (const [rv, alpha] of /** @type {[number | null, number][]} */ ([
    [pointed, 0.4],
    [threshold, 1],
  ])) {
    if (rv === null || rv > most) continue;
    const x = plot.x(rv);
    pen.globalAlpha = alpha;
    pen.strokeStyle = around.ink;
    pen.lineWidth = 1;
    pen.beginPath();
    pen.moveTo(x, plot.top - 4);
    pen.lineTo(x, plot.bottom);
    pen.stroke();
    pen.globalAlpha = 1;
    for (const line of [...(alone ? behind : lines)].reverse()) dot(pen, x, plot.y(shareAt(line, rv)), line.at, around);
  }
  paintInside(pen, width, plot, content, around);
  if (threshold <= most) {
    pen.textAlign = "center";
    pen.font = `600 ${letterFont(around)}`;
    writeHaloed(pen, told ?? levelText(threshold), plot.x(threshold), plot.top - 12, width, around);
    pen.font = letterFont(around);
  }
  if (!alone) paintNames(pen, width, plot, content, around);
}

/**
 * Names of the lines behind, each at a height of its own: those on the left high, those on the right low.
 * @param {CanvasRenderingContext2D} pen
 * @param {number} width
 * @param {SharePlot} plot
 * @param {SharesContent} content
 * @param {Surroundings} around
 */
function paintInside(pen, width, plot, { behind = [], lines, most }, around) {
  /** @param {ShareLine} line @param {number} level */
  const reach = ({ rv, share }, level) => rv[share.findIndex((one) => one >= level)] ?? most;
  const sorted = [...behind].sort((a, b) => reach(a, 0.5) - reach(b, 0.5));
  pen.textAlign = "center";
  sorted.forEach((line, k) => {
    const level = 0.92 - (0.84 * (k + 0.5)) / sorted.length;
    const x = plot.x(Math.min(most, reach(line, level)));
    const half = pen.measureText(line.name).width / 2 + 7;
    if (lines.length === 0) dot(pen, x, plot.y(level), line.at, around);
    writeHaloed(pen, line.name, x + (x + 2 * half < plot.right ? half : -half), plot.y(level), width, around);
  });
}

/**
 * Grid, axes, numbers and what they are of.
 * @param {CanvasRenderingContext2D} pen
 * @param {Pick<SharePlot, "left" | "right" | "top" | "bottom">} plot
 * @param {{ across: [number, string][], up?: [number, string][], words: { x: string, y: string } }} marks
 * @param {Surroundings} around
 */
export function paintAxes(pen, plot, { across, up, words }, around) {
  const { left, right, top, bottom } = plot;
  const rising = up ?? [0, 20, 40, 60, 80, 100].map((one) => [bottom - ((bottom - top) * one) / 100, String(one)]);
  pen.strokeStyle = around.ink;
  pen.fillStyle = around.ink;
  pen.lineWidth = 1;
  pen.globalAlpha = 0.12;
  pen.beginPath();
  for (const [x] of across) {
    pen.moveTo(x, top);
    pen.lineTo(x, bottom);
  }
  for (const [y] of rising) {
    pen.moveTo(left, Number(y));
    pen.lineTo(right, Number(y));
  }
  pen.stroke();
  pen.globalAlpha = 0.6;
  pen.beginPath();
  pen.moveTo(left, top);
  pen.lineTo(left, bottom);
  pen.lineTo(right, bottom);
  pen.stroke();
  pen.globalAlpha = 1;
  pen.textBaseline = "middle";
  pen.textAlign = "center";
  for (const [x, text] of across) if (text !== "") pen.fillText(text, x, bottom + 12);
  if (words.x !== "") pen.fillText(words.x, (left + right) / 2, bottom + 31, right - left + 40);
  pen.textAlign = "right";
  for (const [y, text] of rising) pen.fillText(String(text), left - 7, Number(y));
  // Read from left to right like everything else, above the axis.
  pen.textAlign = "start";
  pen.fillText(words.y, 4, 8);
}

/**
 * @param {CanvasRenderingContext2D} pen
 * @param {SharePlot} plot
 * @param {ShareLine} line
 * @param {number[]} values its shares, or an end of its band
 * @param {number} most
 * @param {boolean} [back] from right to left
 */
function traceLine(pen, plot, line, values, most, back = false) {
  let before = shareAt(line, plot.least, values);
  /** @type {[number, number][]} */
  const corners = [[plot.left, plot.y(before)]];
  line.rv.forEach((x, at) => {
    if (x <= plot.least || x > most || (line.steps && values[at] === before)) return;
    if (line.steps) corners.push([plot.x(x), plot.y(before)]);
    corners.push([plot.x(x), plot.y(values[at])]);
    before = values[at];
  });
  corners.push([plot.right, plot.y(before)]);
  for (const [x, y] of back ? corners.reverse() : corners) pen.lineTo(x, y);
}

/**
 * @param {CanvasRenderingContext2D} pen
 * @param {SharePlot} plot
 * @param {ShareLine} line
 * @param {number} most
 * @param {Surroundings} around
 */
function paintBand(pen, plot, line, most, around) {
  const { low, high, at } = line;
  if (low === null || high === null) return;
  pen.beginPath();
  traceLine(pen, plot, line, high, most);
  traceLine(pen, plot, line, low, most, true);
  pen.closePath();
  pen.fillStyle = seriesColour(at, around.theme);
  pen.globalAlpha = 0.16;
  pen.fill();
  pen.globalAlpha = 1;
}

/** @param {CanvasRenderingContext2D} pen @param {number} at @param {number} width @param {Surroundings} around */
function strokeSeries(pen, at, width, around) {
  strokeLine(pen, seriesColour(at, around.theme), at, width, 1);
}

/** @param {CanvasRenderingContext2D} pen @param {string} colour @param {number} at gives the dash @param {number} width @param {number} alpha */
export function strokeLine(pen, colour, at, width, alpha) {
  pen.strokeStyle = colour;
  pen.lineWidth = width;
  pen.globalAlpha = alpha;
  pen.setLineDash(seriesDash(at));
  pen.stroke();
  pen.setLineDash([]);
  pen.globalAlpha = 1;
}

/** @param {CanvasRenderingContext2D} pen @param {number} x @param {number} y @param {number} at @param {Surroundings} around */
function dot(pen, x, y, at, around) {
  pen.beginPath();
  pen.arc(x, y, 3.2, 0, 2 * Math.PI);
  pen.fillStyle = seriesColour(at, around.theme);
  pen.strokeStyle = around.paper;
  pen.lineWidth = 1.2;
  pen.fill();
  pen.stroke();
}

/**
 * Heights of lines of text near where they should be, none over another.
 * @param {number[]} wished falling on the page
 * @param {number} step
 * @param {number} top
 * @param {number} bottom
 */
export function spreadLines(wished, step, top, bottom) {
  const placed = [...wished];
  let floor = top;
  placed.forEach((y, at) => {
    placed[at] = Math.max(y, floor);
    floor = placed[at] + step;
  });
  let ceiling = bottom;
  for (let at = placed.length - 1; at >= 0; at--) {
    placed[at] = Math.min(placed[at], ceiling);
    ceiling = placed[at] - step;
  }
  return placed;
}

/**
 * Names with a piece of their line and the share at the threshold: beside the ends of the lines, or below the plot.
 * @param {CanvasRenderingContext2D} pen
 * @param {number} width
 * @param {SharePlot} plot
 * @param {SharesContent} content
 * @param {Surroundings} around
 */
function paintNames(pen, width, plot, { lines, most, threshold }, around) {
  const wide = width >= WIDE;
  const entries = lines.map((line) => ({
    ...line,
    end: shareAt(line, most),
    reached: shareAt(line, threshold),
  }));
  entries.sort((a, b) => b.end - a.end || b.reached - a.reached || a.at - b.at);
  const below = plot.bottom + AROUND_PLOT.bottom + NAME_LINE / 2;
  const heights = wide
    ? spreadLines(entries.map(({ end }) => plot.y(end)), NAME_LINE, plot.top, plot.bottom - 4)
    : entries.map((_, k) => below + k * NAME_LINE);
  const left = wide ? plot.right + 16 : AROUND_PLOT.left;
  pen.textBaseline = "middle";
  if (wide) {
    pen.textAlign = "right";
    pen.fillText(`at ${levelText(threshold)}`, width - 6, plot.top - 18);
  }
  entries.forEach(({ name, at, end, reached }, k) => {
    const y = heights[k];
    if (wide) {
      pen.beginPath();
      pen.moveTo(plot.right + 2, plot.y(end));
      pen.lineTo(left - 2, y);
      pen.strokeStyle = seriesColour(at, around.theme);
      pen.lineWidth = 0.8;
      pen.globalAlpha = 0.6;
      pen.stroke();
      pen.globalAlpha = 1;
    }
    pen.beginPath();
    pen.moveTo(left, y);
    pen.lineTo(left + SWATCH, y);
    strokeSeries(pen, at, 2, around);
    pen.fillStyle = around.ink;
    pen.textAlign = "right";
    const share = percentText(reached);
    pen.fillText(share, width - 6, y);
    const room = width - 6 - pen.measureText(share).width - 8 - (left + SWATCH + 6);
    pen.textAlign = "start";
    pen.fillText(fitting(pen, name, room), left + SWATCH + 6, y);
  });
}

/** The beginning of a name, as much as there is room for. @param {CanvasRenderingContext2D} pen @param {string} name @param {number} room */
function fitting(pen, name, room) {
  const letters = [...name];
  if (pen.measureText(name).width <= room) return name;
  while (letters.length > 1 && pen.measureText(`${letters.join("")}…`).width > room) letters.pop();
  return `${letters.join("")}…`;
}

/** @param {number} low @param {number} high */
export function roundTicks(low, high) {
  const raw = (high - low) / 4;
  const unit = 10 ** Math.floor(Math.log10(raw));
  const step = unit * ([1, 2, 5, 10].find((one) => one * unit >= raw) ?? 10);
  const first = Math.floor(low / step + 1e-9);
  const last = Math.ceil(high / step - 1e-9);
  return Array.from({ length: last - first + 1 }, (_, k) => (first + k) * step);
}

/** Outlines of points, in shares of their size. @type {number[][][]} */
const SHAPES = [
  [],
  [[-0.9, -0.9], [0.9, -0.9], [0.9, 0.9], [-0.9, 0.9]],
  [[0, -1.2], [1.1, 0.8], [-1.1, 0.8]],
  [[0, -1.3], [1.3, 0], [0, 1.3], [-1.3, 0]],
  [[-1.1, -0.8], [1.1, -0.8], [0, 1.2]],
];

/**
 * @param {Surface} surface
 * @param {{ points: { name: string, at: number, share: number, information: number }[], words: { x: string, y: string } }} content
 * @param {Surroundings} around
 */
export function paintInformation({ pen, width, height }, { points, words }, around) {
  const plot = { left: 54, right: width - 16, top: 24, bottom: height - AROUND_PLOT.bottom };
  const { left, right, top, bottom } = plot;
  const values = points.map(({ information }) => information);
  const [low, high] = [Math.min(...values), Math.max(...values)];
  const pad = high > low ? (high - low) / 8 : Math.abs(high) / 10 || 1;
  const up = roundTicks(low - pad, high + pad);
  const across = roundTicks(0, 100 * Math.max(0.05, ...points.map(({ share }) => share)));
  const [first, last, far] = [up[0], up[up.length - 1], across[across.length - 1]];
  /** @param {number} share */
  const x = (share) => left + ((right - left) * 100 * share) / far;
  /** @param {number} value */
  const y = (value) => bottom - ((bottom - top) * (value - first)) / (last - first);
  pen.font = letterFont(around);
  paintAxes(
    pen,
    plot,
    { across: across.map((one) => [x(one / 100), enteredText(one)]), up: up.map((one) => [y(one), enteredText(one)]), words },
    around,
  );
  for (const { at, share, information } of points) {
    pen.beginPath();
    const shape = SHAPES[at % SHAPES.length];
    const [px, py] = [x(share), y(information)];
    if (shape.length === 0) pen.arc(px, py, 4.5, 0, 2 * Math.PI);
    for (const [dx, dy] of shape) pen.lineTo(px + 4.5 * dx, py + 4.5 * dy);
    pen.closePath();
    pen.fillStyle = seriesColour(at, around.theme);
    pen.fill();
  }
  // Names stand beside their points, towards the middle, and make room for one another.
  const sorted = [...points].sort((a, b) => b.information - a.information);
  for (const rightwards of [true, false]) {
    const side = sorted.filter(({ share }) => x(share) < (left + right) / 2 === rightwards);
    const heights = spreadLines(side.map(({ information }) => y(information)), 13, top + 4, bottom - 6);
    side.forEach(({ name, share }, k) => {
      pen.textAlign = rightwards ? "start" : "right";
      const text = fitting(pen, name, (right - left) / 2 - 12);
      // The halo's own bounds count from the middle.
      const half = pen.measureText(text).width / 2;
      pen.textAlign = "center";
      writeHaloed(pen, text, x(share) + (rightwards ? 10 + half : -10 - half), heights[k], width, around);
    });
  }
}
