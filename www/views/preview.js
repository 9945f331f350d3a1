/** The electrodes on a small head, without any map: to see at a glance whether axes and labels are right. */

import { LEAST_WIDTH, paintHead } from "../draw/head.js";
import { paintViews } from "../draw/plates.js";
import { shortName } from "../text/figures.js";
import { previewText, word } from "../text/words.js";
import { need } from "./element.js";
import { figureTools } from "./figure.js";
import { keepPainted, paintOn } from "./surface.js";

/** @import { Session } from "../session/session.js" */
/** @import { Side, Standpoint } from "../draw/head.js" */

/** @type {{ id: string, view: "above" | "left", from: Standpoint, sides: Side[] }[]} */
const PREVIEWS = [
  { id: "preview-above", view: "above", from: { turn: 0, tilt: 90 }, sides: ["left", "right", "front"] },
  { id: "preview-left", view: "left", from: { turn: 90, tilt: 0 }, sides: ["front", "back"] },
];

/** Directions of the electrodes with x right, y front, z up. @param {InwardReport} preamble */
function directionsOf({ head, electrodes }) {
  return electrodes.map(({ position_mm: place }) => {
    const arm = place.map((part, at) => part - head.centre_mm[at]);
    const turned = head.axes.map((axis) => axis.reduce((sum, part, at) => sum + part * arm[at], 0));
    const length = Math.hypot(...turned) || 1;
    return turned.map((part) => part / length);
  });
}

/** The electrodes farthest to each side, of the upper half of the head. @param {number[][]} directions */
function outermost(directions) {
  /** @param {(direction: number[]) => number} reach */
  const farthest = (reach) => {
    /** @param {number[]} direction */
    const cost = (direction) => reach(direction) - (direction[2] < 0 ? 2 : 0);
    return directions.reduce((best, direction, at) => (cost(direction) > cost(directions[best]) ? at : best), 0);
  };
  return {
    front: farthest(([, y]) => y),
    left: farthest(([x]) => -x),
    right: farthest(([x]) => x),
    back: farthest(([, y]) => -y),
    top: farthest(([, , z]) => z),
  };
}

/** @param {InwardReport} preamble */
function previewsOf(preamble) {
  const directions = directionsOf(preamble);
  const ends = outermost(directions);
  const labels = Object.fromEntries(Object.entries(ends).map(([end, at]) => [end, shortName(preamble.electrodes[at].label)]));
  return PREVIEWS.map(({ id, view, from, sides }) => ({
    id,
    alt: previewText(view, labels),
    content: {
      figure: { shells: [{ tissue: "scalp", radius: 1 }], electrodes: directions, dipole: null, axis: true },
      electrodes: preamble.electrodes.map(({ label, used }) => ({ label, used, x: 0, y: 0 })),
      pointed: -1,
      named: [...new Set(Object.values(ends))],
      from,
      letters: sides.map((side) => ({ side, text: word(`map.${side}`) })),
      seen: word(`view.${view}`),
    },
  }));
}

/** @param {Session} session */
export function showPreview(session) {
  const now = () => {
    const preamble = session.read().answer?.preamble;
    return preamble === undefined || preamble.electrodes.length === 0 ? [] : previewsOf(preamble);
  };
  figureTools(session, need("preview-tools", HTMLElement), () => {
    const views = now();
    return views.length === 0 ? null : {
      name: "inward-electrodes",
      title: word("electrodes"),
      description: views.map(({ alt }) => alt).join(" "),
      width: 480,
      least: 300,
      paint: (width, around, penAt) => paintViews(width, around, penAt, { views: views.map(({ content }) => content), marks: [] }),
    };
  });
  return keepPainted(need("preview", HTMLElement), (printing) => {
    for (const { id, alt, content } of now()) {
      const canvas = need(id, HTMLCanvasElement);
      canvas.setAttribute("aria-label", alt);
      paintOn(canvas, printing, (surface, around) => paintHead(surface, content, around), LEAST_WIDTH);
    }
  });
}
