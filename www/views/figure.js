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
 * @param {string} title
 * @param {string} description
 * @param {number} width
 * @param {Surroundings} around
 * @param {FigurePainter} paint
 */
export function drawnFigure(title, description, width, around, paint) {
  const figure = emptyFigure(title, description);
  const paper = svgElement("rect", { width: "100%", height: "100%", fill: around.paper });
  figure.append(paper);
  const height = paint(width, around, (x, y) => {
    const part = svgElement("g", x === 0 && y === 0 ? {} : { transform: `translate(${x} ${y})` });
    figure.append(part);
    // The painters use no more of a canvas than the pen has.
    return /** @type {any} */ (new SvgPen(part));
  });
  sizeFigure(figure, width, height);
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
  const figure = drawnFigure("", "", width, surroundingsOf(place, printing), paint);
  for (const part of ["title", "desc"]) figure.querySelector(part)?.remove();
  figure.setAttribute("aria-label", name);
  place.querySelector("svg")?.remove();
  place.prepend(figure);
}

/**
 * Buttons that save a figure.
 * @param {Session} session
 * @param {HTMLElement} place
 * @param {() => { name: string, title: string, description: string, width: number, paint: FigurePainter } | null} ask
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
      if (asked === null) return;
      const figure = drawnFigure(asked.title, asked.description, asked.width, FOR_FILES, asked.paint);
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
