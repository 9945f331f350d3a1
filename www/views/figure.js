/** A figure as it stands on the page, and what saves it. */

import { surroundingsOf } from "../draw/canvas.js";
import { SvgPen, svgElement } from "../draw/pen.js";
import { emptyFigure, figureBitmap, figureDots, figureSvg, FOR_FILES, sizeFigure } from "../export/figure.js";
import { saveBlob } from "../export/out.js";
import { figureSavedText, tooManyDotsText, word } from "../text/words.js";
import { make } from "./element.js";

/** @import { Surroundings } from "../draw/canvas.js" */
/** @import { Session } from "../session/session.js" */

/** Widths of columns in journals, and dots that printers ask for. */
const WIDTHS_MM = [85, 120, 180];
const RESOLUTIONS = [150, 300, 600];
const PIXELS_A_MM = 96 / 25.4;

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
 * @param {{ around?: Surroundings, prefix?: string, inMillimetres?: boolean }} [options] `prefix` keeps names apart where several share a page
 */
export function drawFigure({ title, description, width: usual, least = 0, paint }, width = usual, { around = FOR_FILES, prefix = "", inMillimetres } = {}) {
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
  sizeFigure(figure, drawn, height, width, inMillimetres);
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

/** The one panel of all figures, at the one that it was asked for last. @type {ReturnType<typeof makePanel> | null} */
let panel = null;

/** Size and resolution are kept for the next figure. @param {Session} session */
function makePanel(session) {
  const element = make("div", "", { class: "figure-panel", role: "group" });
  /** @param {string} code @param {[string, string][]} options @param {string} value */
  const list = (code, options, value) => {
    const select = /** @type {HTMLSelectElement} */ (make("select", "", { "data-figure": code }));
    for (const [own, text] of options) select.append(make("option", text, { value: own }));
    select.value = value;
    const label = make("label", `${word(`figure.${code}`)} `);
    label.append(select);
    element.append(label);
    return select;
  };
  const width = list("width", [...WIDTHS_MM.map((mm) => /** @type {[string, string]} */ ([String(mm), `${mm} mm`])), ["", word("figure.page")]], "");
  const resolution = list("resolution", RESOLUTIONS.map((one) => [String(one), String(one)]), "300");
  const said = make("span", "", { role: "status", class: "small" });
  const state = { element, button: /** @type {HTMLElement | null} */ (null), ask: /** @type {FigureAsked} */ (() => null), frame: /** @type {HTMLElement | undefined} */ (undefined) };
  for (const kind of ["svg", "png"]) {
    const button = make("button", word(`figure.${kind}`), { type: "button", "data-figure": kind });
    button.addEventListener("click", async () => {
      said.textContent = "";
      try {
        const asked = await state.ask();
        said.textContent = asked ? await save(asked, kind) : word("figure.none");
      } catch (error) {
        session.fail(error);
      }
    });
    element.append(button);
  }
  element.append(said);

  /** @param {FigureParts} asked @param {string} kind */
  async function save(asked, kind) {
    const figure = drawFigure(asked, Number(width.value) * PIXELS_A_MM || state.frame?.clientWidth || asked.width, { inMillimetres: true });
    const name = `${asked.name}.${kind}`;
    if (kind === "svg") saveBlob(figureSvg(figure), name);
    else {
      const dots = figureDots(figure, Number(resolution.value));
      if (dots.tooMany) return tooManyDotsText(dots);
      saveBlob(await figureBitmap(figure, Number(resolution.value)), name);
    }
    return figureSavedText(name, kind === "png" ? figureDots(figure, Number(resolution.value)) : null);
  }

  function close() {
    state.button?.setAttribute("aria-expanded", "false");
    element.remove();
    said.textContent = "";
  }
  element.addEventListener("keydown", (event) => {
    if (event.key !== "Escape") return;
    event.stopPropagation();
    close();
    state.button?.focus();
  });
  return {
    /** At this button, or away from it. @param {HTMLElement} button @param {FigureAsked} ask @param {HTMLElement} [frame] */
    turn(button, ask, frame) {
      const open = button.getAttribute("aria-expanded") === "true";
      close();
      if (open) return;
      Object.assign(state, { button, ask, frame });
      element.setAttribute("aria-label", button.textContent ?? "");
      button.setAttribute("aria-expanded", "true");
      button.after(element);
    },
  };
}

/** @typedef {() => FigureParts | null | undefined | Promise<FigureParts | null>} FigureAsked */

/**
 * A button that unfolds what saves a figure.
 * @param {Session} session
 * @param {HTMLElement} place
 * @param {FigureAsked} ask
 * @param {HTMLElement} [frame] as wide as the figure is on the page, where that hangs on the page
 */
export function figureTools(session, place, ask, frame) {
  const button = make("button", word("figure.save"), { type: "button", class: "quiet figure-save", "aria-expanded": "false" });
  button.addEventListener("click", () => (panel ??= makePanel(session)).turn(button, ask, frame));
  place.append(button);
}
