/** Many dipoles seen from above, behind and the left, on canvases of one panel; one that is clicked on is told. */

import { surfaceAt } from "../draw/canvas.js";
import { dipoleOnHead, paintDipoles } from "../draw/dipoles.js";
import { LEAST_WIDTH } from "../draw/head.js";
import { layOutViews } from "../draw/plates.js";
import { word } from "../text/words.js";
import { make } from "./element.js";
import { HEAD_VIEWS } from "./plates.js";
import { paintOn } from "./surface.js";

/** @import { Surroundings } from "../draw/canvas.js" */
/** @import { DipolesContent } from "../draw/dipoles.js" */

/** CSS pixels of a saved figure, and of one that is still read. */
export const SAVED_VIEWS = 750;
export const LEAST_VIEWS = 320;
const DIPOLE_REACH = { mouse: 12, touch: 22 };

/** @typedef {Omit<DipolesContent, "from" | "letters" | "seen">} SeenDipoles */

/** Shells in scalp radii. @param {Answer | null | undefined} answer */
export function shellsOf(answer) {
  const { shells, radius_mm: whole } = answer?.preamble.head ?? { shells: [], radius_mm: 1 };
  return shells.map(({ outer_radius_mm: radius }) => ({ radius: radius / whole }));
}

/**
 * @param {HTMLElement} place
 * @param {string} title
 * @param {(marked: boolean) => SeenDipoles} content what is drawn, with the chosen one marked or not
 * @param {(at: number) => void} choose
 */
export function threeViews(place, title, content, choose) {
  const views = HEAD_VIEWS.map(({ view, from, sides }) => {
    const seen = word(`view.${view}`);
    const canvas = /** @type {HTMLCanvasElement} */ (make("canvas", "", { id: `${place.id}-${view}`, class: "disc", role: "img", "aria-label": `${title}, ${seen}` }));
    const letters = sides.map((side) => ({ side, text: word(`map.${side}`) }));
    /** @param {PointerEvent} event */
    const under = (event) => {
      const box = canvas.getBoundingClientRect();
      const reach = event.pointerType === "touch" ? DIPOLE_REACH.touch : DIPOLE_REACH.mouse;
      return dipoleOnHead(canvas, { ...content(false), from }, event.clientX - box.left, event.clientY - box.top, reach);
    };
    canvas.addEventListener("pointermove", (event) => {
      canvas.style.cursor = under(event) < 0 ? "" : "pointer";
    });
    canvas.addEventListener("click", (event) => {
      const at = under(/** @type {PointerEvent} */ (event));
      if (at >= 0) choose(at);
    });
    return { canvas, view: { from, letters, seen } };
  });
  place.replaceChildren(...views.map(({ canvas }) => canvas));
  return {
    /** @param {boolean} printing */
    paint(printing) {
      for (const { canvas, view } of views) {
        paintOn(canvas, printing, (surface, around) => paintDipoles(surface, { ...content(!printing), ...view }, around), LEAST_WIDTH);
      }
    },
    /** All three side by side, as they are saved. @param {number} width @param {Surroundings} around @param {(x: number, y: number) => CanvasRenderingContext2D} penAt @param {number} [top] */
    save(width, around, penAt, top = 0) {
      const { boxes, height } = layOutViews(width, views.length);
      boxes.forEach((box, k) => {
        paintDipoles(surfaceAt(penAt, { ...box, y: top + box.y }, LEAST_WIDTH), { ...content(false), ...views[k].view }, around);
      });
      return top + height;
    },
  };
}
