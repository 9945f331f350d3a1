/** Words of a response over time, and of the dipoles of several people. */

import { enteredText, percentText, shortName, timeText, typeset } from "./figures.js";

/** @type {Record<string, string>} */
export const COURSE_WORDS = {
  "course.stopped": "Stopped. Change something, or open this again, to go on.",
  response: "Time points of one response",
  "response.instant": "Time point",
  "response.use": "Click or drag in the curves, or go with the arrow keys (with Page Up and Page Down by ten): the map of that time point is shown everywhere.",
  "response.gfp": "global field power",
  "response.floor": "floor",
  "response.rv": "RV, %",
  "response.place": "position, mm",
  "response.x": "x right",
  "response.y": "y front",
  "response.z": "z up",
  "response.strength": "strength",
  "response.moving": "moving",
  "response.fixed": "one position",
  "response.maps": "Maps at the named time points",
  "response.views": "Positions of the moving dipole",
  "response.quiet": "at or below the floor, where residual variance and position say little",
  "response.baseline": "Set the baseline window",
  "response.noise": "Take it as the noise of the region",
  "response.taken": "Taken as the noise of the region",
  fixed: "One position over an interval",
  "fixed.from": "from",
  "fixed.to": "to",
  "fixed.first": "Start of the interval",
  "fixed.last": "End of the interval",
  "fixed.invalid": "Two times of the response, please; decimals after a point or a comma.",
  groups: "Dipoles of several people",
  "groups.which": "Maps that go in",
  "groups.near": "near-dipolar",
  "groups.all": "all that are fitted",
  "groups.count": "Groups",
  "groups.waiting": "Grouped as soon as all maps are fitted.",
  "groups.people": "Recordings and people",
  "groups.recording": "Recording",
  "groups.person": "Person",
  "groups.persons": "People",
  "groups.own-head": "own head",
  "groups.own": "of its own",
  "groups.dipoles": "Dipoles",
  "groups.group": "Group",
  "groups.place": "Position, mm",
  "groups.spread": "Spread, mm",
  "groups.turn": "Axes, °",
  "groups.rv": "Mean RV, %",
  "groups.map": "Map",
  "groups.maps": "Mean maps",
  "groups.mean-of": "Mean map of",
  "groups.mean": "Means of the members’ interpolated maps, each over its largest value, signs turned to agree: what the pictures have in common, no values of electrodes.",
  "groups.none": "None of its maps can be interpolated.",
  "groups.members": "Members",
  "groups.criterion": "Mean silhouette by number of groups",
  "groups.names": "with names of people and recordings",
};

/** A time point in a line. @param {TimeCourse} course @param {number} index @param {number} radius @param {boolean} quiet */
export function instantText({ times, unit, gfp, gfp_unit, rv, positions }, index, radius, quiet) {
  const parts = [timeText(times[index], unit)];
  const power = gfp[index];
  if (power !== null) parts.push(`global field power ${enteredText(Number(power.toPrecision(3)))} ${gfp_unit}`);
  const share = rv[index];
  if (share !== null) parts.push(`RV ${percentText(share)}`);
  const place = positions[index];
  if (place !== null) parts.push(`x, y, z ${place.map((part) => Math.round(radius * part) || 0).join(", ")} mm`);
  if (quiet) parts.push(COURSE_WORDS["response.quiet"]);
  return typeset(parts.join(" · "));
}

/** @param {number} count of quiet time points @param {number} all @param {number} missing without a fit */
export function quietText(count, all, missing) {
  const parts = count === 0 ? [] : [`${count} of ${all} time points, drawn faint, lie ${COURSE_WORDS["response.quiet"]}.`];
  if (missing > 0) parts.push(`${missing} of ${all} are not fitted.`);
  return parts.join(" ");
}

/** A member of a group. @param {MapRow} row @param {Decomposition} of */
export function memberText({ name, rv }, { name: recording, subject }) {
  return [name, recording, subject].filter((part) => part).map(shortName).concat(`RV ${percentText(rv)}`).join(" · ");
}
