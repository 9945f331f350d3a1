/** A figure as it stands on the page, and the buttons that save it. */

import { surroundingsOf } from "../draw/canvas.js";
import { SvgPen, svgElement } from "../draw/pen.js";
import { emptyFigure, FOR_FILES, saveFigure, sizeFigure } from "../export/figure.js";
import { word } from "../text/words.js";
import { make } from "./element.js";

/** @import { Surroundings } from "../draw/canvas.js" */
/** @import { Session } from "../session/session.js" */

/**
 * What draws a figure of a width and gives its height; `penAt` gives a pen for a part of it.
 * @typedef {(width: number, around: Surroundings, penAt: (x: number, y: number) => CanvasRenderingContext2D) => number} FigurePainter
 */

/**
 * A figure that can leave the page: what its file is called, what it is in words, and how wide it is drawn, in CSS pixels:
 * where nobody says otherwise, and at least.
 * @typedef {{ name: string, title: string, description: string, width: number, least?: number, paint: FigurePainter }} FigureParts
 */

/**
 * A figure as SVG. One that is to be narrower than it can be drawn is drawn as narrow as it can be, and shown smaller.
 * @param {FigureParts} parts
 * @param {number} [width] in CSS pixels
 * @param {{ around?: Surroundings, prefix?: string }} [options] `prefix` keeps names apart where several share a page
 */
export function drawFigure({ title, description, width: usual, least = 0, paint }, width = usual, { around = FOR_FILES, prefix = "" } = {}) {
  const figure = emptyFigure(title, description);
  figure.append(svgElement("rect", { width: "100%", height: "100%", fill: around.paper }));
  const drawn = Math.max(least, width);
  const height = paint(drawn, around, (x, y) => {
    const part = svgElement("g", {});
    figure.append(part);
    const pen = new SvgPen(part, prefix);
    pen.translate(x, y);
    // The painters use no more of a canvas than the pen has.
    return /** @type {any} */ (pen);
  });
  sizeFigure(figure, drawn, height, width);
  return figure;
}

/**
 * Puts a figure on the page, in its width and colours. The page names it by itself: a title would follow the mouse.
 * @param {HTMLElement} place
 * @param {string} name
 * @param {boolean} printing
 * @param {FigurePainter} paint
 */
export function showFigure(place, name, printing, paint) {
  const width = printing ? 640 : place.clientWidth;
  if (width === 0) return;
  const figure = drawFigure({ name, title: "", description: "", width, paint }, width, { around: surroundingsOf(place, printing) });
  for (const part of ["title", "desc"]) figure.querySelector(part)?.remove();
  figure.setAttribute("aria-label", name);
  place.querySelector("svg")?.remove();
  place.prepend(figure);
}

/**
 * Buttons that save a figure.
 * @param {Session} session
 * @param {HTMLElement} place
 * @param {() => FigureParts | null | undefined} ask
 */
export function figureTools(session, place, ask) {
  const sizes = /** @type {HTMLSelectElement} */ (make("select", "", { "aria-label": word("figure.size"), class: "figure-size" }));
  for (const times of [1, 2, 4]) sizes.append(make("option", `${times}×`, { value: String(times) }));
  sizes.value = "2";
  /** @param {boolean} bitmap */
  const button = (bitmap) => {
    const element = make("button", word(bitmap ? "figure.png" : "figure.svg"), { type: "button", "data-figure": bitmap ? "png" : "svg" });
    element.addEventListener("click", async () => {
      const asked = ask();
      if (!asked) return;
      const figure = drawFigure(asked);
      try {
        await saveFigure(figure, asked.name, bitmap ? Number(sizes.value) : null);
      } catch (error) {
        session.fail(error);
      }
    });
    return element;
  };
  place.append(button(false), button(true), sizes);
}
