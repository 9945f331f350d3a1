/** Figures of whole decompositions: curves of the near-dipolar share, and every dipole in the head. */

import { paintShares, shareAt, sharesHeight } from "../draw/curves.js";
import { paintDipoleLegend, paintDipoles } from "../draw/dipoles.js";
import { freshMaps } from "../session/decompositions.js";
import { percentText } from "../text/figures.js";
import { dipoleCountText, noun, shareAtText, shareTitle, word } from "../text/words.js";
import { HEAD_VIEWS } from "../views/plates.js";
import { shellsOf } from "../views/three_views.js";

/** @import { ShareLine } from "../draw/curves.js" */
/** @import { FigureParts } from "../views/figure.js" */

/** Points of a curve of very many maps: more than a reader or a printer can tell apart. */
const MOST_POINTS = 400;
/** CSS pixels of a view of the head. */
const REPORTED_VIEW = 250;

/** @param {ShareLine} line */
function thinned(line) {
  const { rv, share } = line;
  if (rv.length <= MOST_POINTS) return line;
  const at = Array.from({ length: MOST_POINTS }, (_, k) => Math.round((k * (rv.length - 1)) / (MOST_POINTS - 1)));
  return { ...line, rv: at.map((k) => rv[k]), share: at.map((k) => share[k]) };
}

/** @param {ShareLine[]} all @param {number} threshold @param {boolean} components @returns {FigureParts} */
export function sharesFigure(all, threshold, components) {
  const title = shareTitle(noun(components));
  const values = all.map((line) => `${line.name} ${percentText(shareAt(line, threshold))}`).join(", ");
  const lines = all.map(thinned);
  return {
    name: "shares",
    title,
    description: `${shareAtText(threshold)}: ${values}.`,
    width: 700,
    paint: (width, around, penAt) => {
      const height = sharesHeight(width, lines.length);
      const content = { lines, logarithmic: true, most: 1, threshold, pointed: null, words: { x: word("shares.x"), y: title } };
      paintShares({ pen: penAt(0, 0), width, height }, content, around);
      return height;
    },
  };
}

/** @param {Answer} answer @param {number} threshold @returns {FigureParts} */
export function dipolesFigure(answer, threshold) {
  const { radius_mm: radius } = answer.preamble.head;
  const axis = answer.settings.polarity !== "declared";
  const dipoles = freshMaps(answer).flatMap((row) =>
    "rv" in row
      ? [{ position: row.canonical_mm.map((part) => part / radius), direction: row.canonical_direction, axis, rv: row.rv, at: 0, faint: row.rv > threshold }]
      : [],
  );
  const shells = shellsOf(answer);
  return {
    name: "dipoles",
    title: word("dipoles"),
    description: dipoleCountText(dipoles.length, dipoles.length, shareAtText(threshold), "faint"),
    width: 3 * REPORTED_VIEW,
    least: 3 * REPORTED_VIEW,
    paint: (width, around, penAt) => {
      HEAD_VIEWS.forEach(({ view, from, sides }, k) => {
        const letters = sides.map((side) => ({ side, text: word(`map.${side}`) }));
        const surface = { pen: penAt(k * REPORTED_VIEW, 0), width: REPORTED_VIEW, height: REPORTED_VIEW };
        paintDipoles(surface, { dipoles, chosen: -1, byRv: true, shells, from, letters, seen: word(`view.${view}`) }, around);
      });
      const legend = { byRv: true, threshold, names: [], words: word("dipoles.rv") };
      return REPORTED_VIEW + 8 + paintDipoleLegend(penAt(0, REPORTED_VIEW + 8), width, legend, around);
    },
  };
}
