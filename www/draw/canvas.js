/** A canvas at the device's resolution, and the inks of its surroundings. */

/** @import { Theme } from "./scale.js" */

/**
 * @typedef {{ ink: string, paper: string, theme: Theme, font: string, ratio: number }} Surroundings
 */

const PRINT_RATIO = 3;

/** @param {string} colour as computed style gives it */
function luminanceOf(colour) {
  const [red = 0, green = 0, blue = 0] = (colour.match(/[\d.]+/g) ?? []).map(Number);
  return (0.2126 * red + 0.7152 * green + 0.0722 * blue) / 255;
}

/**
 * Takes ink and font from the style sheet, so that themes and forced colours reach the canvas; paper prints light.
 * @param {HTMLCanvasElement} canvas
 * @param {boolean} printing
 * @returns {Surroundings}
 */
export function surroundingsOf(canvas, printing) {
  const style = getComputedStyle(canvas);
  const font = style.fontFamily;
  if (printing)
    return { ink: "rgb(20, 20, 20)", paper: "rgb(255, 255, 255)", theme: "light", font, ratio: PRINT_RATIO };
  const dark = luminanceOf(style.color) > 0.5;
  return {
    ink: style.color,
    paper: style.backgroundColor,
    theme: dark ? "dark" : "light",
    font,
    ratio: devicePixelRatio || 1,
  };
}

/**
 * Sizes the bitmap to the canvas's place on the page; drawing then happens in CSS pixels.
 * @param {HTMLCanvasElement} canvas
 * @param {number} ratio
 */
export function openCanvas(canvas, ratio) {
  const width = canvas.clientWidth;
  const height = canvas.clientHeight;
  const pen = canvas.getContext("2d");
  if (pen === null || width === 0 || height === 0) return null;
  canvas.width = Math.round(width * ratio);
  canvas.height = Math.round(height * ratio);
  pen.setTransform(canvas.width / width, 0, 0, canvas.height / height, 0, 0);
  return { pen, width, height };
}
