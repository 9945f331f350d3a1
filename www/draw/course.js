/** Curves over time, one plot below the other on one axis of time. What is near the noise is faint. */

import { paintAxes, roundTicks, strokeLine } from "./curves.js";
import { letterFont, writeHaloed } from "./marks.js";
import { seriesColour } from "./series.js";
import { timeText } from "../text/figures.js";

/** @import { Surroundings } from "./canvas.js" */

/**
 * @typedef {object} CourseLine
 * @property {string} name empty where there is one line alone
 * @property {number} at gives colour and dash
 * @property {(number | null)[]} values from the time point `first` on
 * @property {number} first
 */

/**
 * @typedef {object} CoursePlot
 * @property {string} words what it is of
 * @property {CourseLine[]} lines
 * @property {{ value: number, text: string } | null} level a line across
 */

/**
 * @typedef {object} CourseContent
 * @property {number[]} times rising
 * @property {string} words of the axis of time
 * @property {boolean[]} quiet time points that are faint
 * @property {CoursePlot[]} plots
 * @property {{ index: number, text: string }[]} marks
 * @property {number} chosen a time point with a line through all plots, or -1
 * @property {[number, number] | null} span an interval of time points that is shaded
 */

/** CSS pixels: from the left to the plots, beside them, and of each its place, height and distance from the next. */
const COURSE = { left: 46, right: 14, top: 20, high: 66, step: 94, below: 40 };
const QUIET_ALPHA = 0.3;

/** @param {number} width @param {Pick<CourseContent, "times" | "plots">} content */
export function layOutCourse(width, { times, plots }) {
  const [from, to] = [times[0], times[times.length - 1]];
  const [left, right] = [COURSE.left, width - COURSE.right];
  const span = to - from || 1;
  /** @param {number} time */
  const along = (time) => left + ((right - left) * (time - from)) / span;
  return {
    left,
    right,
    top: COURSE.top,
    bottom: (plots.length - 1) * COURSE.step + COURSE.top + COURSE.high,
    height: plots.length * COURSE.step + COURSE.below,
    along,
    /** @param {number} index */
    x: (index) => along(times[index]),
    /** The time point nearest to a place. @param {number} x */
    index: (x) => times.reduce((best, time, at) => (Math.abs(along(time) - x) < Math.abs(along(times[best]) - x) ? at : best), 0),
  };
}

/**
 * @param {number} width
 * @param {Surroundings} around
 * @param {(x: number, y: number) => CanvasRenderingContext2D} penAt
 * @param {CourseContent} content
 */
export function paintCourse(width, around, penAt, content) {
  const { times, words, plots, chosen, span, marks } = content;
  const place = layOutCourse(width, content);
  const [from, to] = [times[0], times[times.length - 1]];
  const moments = to > from ? roundTicks(from, to).filter((time) => time >= from && time <= to) : [from];
  plots.forEach((plot, k) => {
    const pen = penAt(0, k * COURSE.step);
    const last = k === plots.length - 1;
    const { left, right, top, bottom } = { ...place, bottom: COURSE.top + COURSE.high };
    const values = [...plot.lines.flatMap((line) => line.values), plot.level?.value ?? 0].filter((value) => value !== null);
    const [low, high] = values.reduce(([least, most], value) => [Math.min(least, value), Math.max(most, value)], [0, 0]);
    const ticks = roundTicks(low, high > low ? high : low + 1);
    const [first, far] = [ticks[0], ticks[ticks.length - 1]];
    const y = (/** @type {number} */ value) => bottom - ((bottom - top) * (value - first)) / (far - first);
    pen.font = letterFont(around);
    if (span !== null) {
      pen.fillStyle = around.ink;
      pen.globalAlpha = 0.08;
      pen.fillRect(place.x(span[0]) - 1, top, place.x(span[1]) - place.x(span[0]) + 2, bottom - top);
      pen.globalAlpha = 1;
    }
    paintAxes(
      pen,
      { left, right, top, bottom },
      {
        across: moments.map((time) => [place.along(time), last ? timeText(time, "") : ""]),
        up: ticks.map((tick) => [y(tick), timeText(tick, "")]),
        words: { x: last ? words : "", y: plot.words },
      },
      around,
    );
    pen.lineWidth = 1;
    /** @param {number} x0 @param {number} y0 @param {number} x1 @param {number} y1 @param {number[]} dash @param {number} alpha */
    const rule = (x0, y0, x1, y1, dash, alpha) => {
      pen.strokeStyle = around.ink;
      pen.globalAlpha = alpha;
      pen.setLineDash(dash);
      pen.beginPath();
      pen.moveTo(x0, y0);
      pen.lineTo(x1, y1);
      pen.stroke();
      pen.setLineDash([]);
      pen.globalAlpha = 1;
    };
    for (const { index } of marks) rule(place.x(index), top, place.x(index), bottom, [1.5, 2.5], 0.6);
    if (plot.level !== null) rule(left, y(plot.level.value), right, y(plot.level.value), [5, 3], 0.8);
    pen.lineCap = "round";
    for (const line of plot.lines) {
      for (const loud of [false, true]) {
        traceCourse(pen, line, (at) => loud <= !content.quiet[at], place.x, y);
        strokeLine(pen, seriesColour(line.at, around.theme), line.at, 1.75, loud ? 1 : QUIET_ALPHA);
      }
    }
    pen.lineCap = "butt";
    if (chosen >= 0) rule(place.x(chosen), top - 4, place.x(chosen), bottom, [], 1);
    pen.textAlign = "center";
    pen.textBaseline = "middle";
    if (plot.level !== null) writeHaloed(pen, plot.level.text, right - pen.measureText(plot.level.text).width / 2 - 4, y(plot.level.value) - 8, width, around);
    if (k === 0) marks.forEach(({ index, text }, at) => writeHaloed(pen, text, place.x(index), top + 6 + 13 * at, width, around));
    // Names with a piece of their line, beside what the plot is of.
    let at = 4 + pen.measureText(plot.words).width + 10;
    pen.textAlign = "start";
    for (const line of plot.lines.filter(({ name }) => name !== "")) {
      pen.beginPath();
      pen.moveTo(at, 8);
      pen.lineTo(at + 16, 8);
      strokeLine(pen, seriesColour(line.at, around.theme), line.at, 1.75, 1);
      pen.fillStyle = around.ink;
      pen.fillText(line.name, at + 19, 8);
      at += pen.measureText(line.name).width + 27;
    }
  });
  return place.height;
}

/** @param {CanvasRenderingContext2D} pen @param {CourseLine} line @param {(at: number) => boolean} shown @param {(at: number) => number} x @param {(value: number) => number} y */
function traceCourse(pen, { values, first }, shown, x, y) {
  let drawing = false;
  pen.beginPath();
  values.forEach((value, k) => {
    const there = value !== null && shown(first + k);
    // A point alone is a dot.
    if (value !== null && there && !drawing) pen.moveTo(x(first + k), y(value));
    if (value !== null && there) pen.lineTo(x(first + k), y(value));
    drawing = there;
  });
}
