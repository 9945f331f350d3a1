/** Figures as files: SVG with its own colours, and PNG made of it by the browser. */

import { svgElement } from "../draw/pen.js";
import { saveBlob } from "./out.js";

/** @import { Surroundings } from "../draw/canvas.js" */

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

/** @param {SVGSVGElement} figure @param {number} width as it is drawn @param {number} height @param {number} shown as wide as it is shown */
export function sizeFigure(figure, width, height, shown) {
  const [box, high] = [`0 0 ${round2(width)} ${round2(height)}`, round2((height * shown) / width)];
  for (const [name, value] of Object.entries({ width: round2(shown), height: high, viewBox: box })) figure.setAttribute(name, String(value));
}

/** @param {number} value */
function round2(value) {
  return Math.round(100 * value) / 100;
}

/** @param {SVGSVGElement} figure */
export function figureText(figure) {
  return `<?xml version="1.0" encoding="UTF-8"?>\n${new XMLSerializer().serializeToString(figure)}\n`;
}

/** @param {SVGSVGElement} figure @param {number} times larger than it is drawn @returns {Promise<Blob>} */
export async function figureBitmap(figure, times) {
  const image = new Image();
  const address = URL.createObjectURL(new Blob([figureText(figure)], { type: "image/svg+xml" }));
  try {
    image.src = address;
    await image.decode();
    const [width, height] = ["width", "height"].map((side) => Math.round(times * Number(figure.getAttribute(side))));
    const canvas = Object.assign(document.createElement("canvas"), { width, height });
    const pen = canvas.getContext("2d");
    if (pen === null) throw new TypeError("no canvas to draw on");
    pen.drawImage(image, 0, 0, width, height);
    return await new Promise((resolve, reject) => {
      canvas.toBlob((blob) => (blob === null ? reject(new TypeError("the picture is too large")) : resolve(blob)), "image/png");
    });
  } finally {
    URL.revokeObjectURL(address);
  }
}

/** @param {SVGSVGElement} figure @param {string} name without an ending @param {number | null} times null for SVG */
export async function saveFigure(figure, name, times) {
  if (times === null) saveBlob(new Blob([figureText(figure)], { type: "image/svg+xml" }), `${name}.svg`);
  else saveBlob(await figureBitmap(figure, times), `${name}.png`);
}
