/** Figures as files: SVG with its own colours, and PNG made of it by the browser. */

import { rounded, svgElement } from "../draw/pen.js";
import { withResolution } from "./png.js";

/** @import { Surroundings } from "../draw/canvas.js" */

const MM_A_PIXEL = 25.4 / 96;
/** What all browsers draw, and what memory has room for. */
const MOST_DOTS_A_SIDE = 16_384;
const MOST_DOTS = 100_000_000;

/** What a figure is drawn for when it leaves the page: white paper, in any font that the reader has. @type {Surroundings} */
export const FOR_FILES = {
  ink: "rgb(20 20 20)",
  paper: "rgb(255 255 255)",
  theme: "light",
  font: "sans-serif",
  ratio: 1,
  wide: null,
};

/**
 * A drawing that stands by itself, on paper of its own.
 * @param {string} title
 * @param {string} description
 */
export function emptyFigure(title, description) {
  const figure = /** @type {SVGSVGElement} */ (svgElement("svg", { role: "img" }));
  figure.append(svgElement("title", {}, title), svgElement("desc", {}, description));
  return figure;
}

/**
 * @param {SVGSVGElement} figure
 * @param {number} width as it is drawn
 * @param {number} height
 * @param {number} shown as wide as it is shown, in CSS pixels
 * @param {boolean} [inMillimetres] which programs for print understand alike
 */
export function sizeFigure(figure, width, height, shown, inMillimetres = false) {
  const [unit, times] = inMillimetres ? ["mm", MM_A_PIXEL] : ["", 1];
  const sides = { width: shown, height: (height * shown) / width };
  figure.setAttribute("viewBox", `0 0 ${rounded(width)} ${rounded(height)}`);
  for (const [name, value] of Object.entries(sides)) figure.setAttribute(name, `${rounded(value * times)}${unit}`);
}

/** @param {SVGSVGElement} figure */
function figureText(figure) {
  return `<?xml version="1.0" encoding="UTF-8"?>\n${new XMLSerializer().serializeToString(figure)}\n`;
}

/** @param {SVGSVGElement} figure */
export function figureSvg(figure) {
  return new Blob([figureText(figure)], { type: "image/svg+xml" });
}

/** How many dots it has. @param {SVGSVGElement} figure in millimetres @param {number} perInch */
export function figureDots(figure, perInch) {
  const [width, height] = ["width", "height"].map((side) => Math.round((parseFloat(figure.getAttribute(side) ?? "") / 25.4) * perInch));
  return { width, height, tooMany: Math.max(width, height) > MOST_DOTS_A_SIDE || width * height > MOST_DOTS };
}

/** @param {SVGSVGElement} figure in millimetres @param {number} perInch @returns {Promise<Blob>} */
export async function figureBitmap(figure, perInch) {
  const { width, height } = figureDots(figure, perInch);
  const sized = /** @type {SVGSVGElement} */ (figure.cloneNode(true));
  // As large as the bitmap, so that no browser draws it small first.
  for (const [name, value] of Object.entries({ width, height })) sized.setAttribute(name, String(value));
  const image = new Image();
  const address = URL.createObjectURL(figureSvg(sized));
  try {
    image.src = address;
    await image.decode();
    const canvas = Object.assign(document.createElement("canvas"), { width, height });
    const pen = canvas.getContext("2d");
    if (pen === null) throw new TypeError("no canvas to draw on");
    pen.drawImage(image, 0, 0, width, height);
    /** @type {Blob} */
    const png = await new Promise((resolve, reject) => {
      canvas.toBlob((blob) => (blob === null ? reject(new TypeError("the picture is too large")) : resolve(blob)), "image/png");
    });
    return withResolution(png, perInch);
  } finally {
    URL.revokeObjectURL(address);
  }
}
