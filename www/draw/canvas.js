/** What painters draw on: a canvas at the device's resolution or a part of a drawing, and the inks around it. */

/** @import { Theme } from "./scale.js" */

/**
 * `wide` is how many CSS pixels across a picture is drawn; null where its place on the page tells.
 * @typedef {{ ink: string, paper: string, theme: Theme, font: string, ratio: number, wide: number | null }} Surroundings
 */

/**
 * A pen and the width and height it has in CSS pixels; `SvgPen` takes as much of a canvas as the painters use.
 * @typedef {{ pen: CanvasRenderingContext2D, width: number, height: number }} Surface
 */

const PRINT_RATIO = 3;
/** Not every browser has laid the page out for paper when it asks for the pictures; there they are 54 mm wide. */
const PRINT_WIDE = 204;

/** @param {string} colour as computed style gives it */
function luminanceOf(colour) {
  const [red = 0, green = 0, blue = 0] = (colour.match(/[\d.]+/g) ?? []).map(Number);
  return (0.2126 * red + 0.7152 * green + 0.0722 * blue) / 255;
}

/**
 * Takes ink and font from the style sheet, so that themes and forced colours reach the canvas; paper prints light.
 * @param {HTMLElement} place
 * @param {boolean} printing
 * @returns {Surroundings}
 */
export function surroundingsOf(place, printing) {
  const style = getComputedStyle(place);
  const font = style.fontFamily;
  if (printing)
    return {
      ink: "rgb(20, 20, 20)",
      paper: "rgb(255, 255, 255)",
      theme: "light",
      font,
      ratio: PRINT_RATIO,
      wide: PRINT_WIDE,
    };
  const dark = luminanceOf(style.color) > 0.5;
  return {
    ink: style.color,
    paper: style.backgroundColor,
    theme: dark ? "dark" : "light",
    font,
    ratio: devicePixelRatio || 1,
    wide: null,
  };
}

/**
 * Sizes the bitmap to the canvas's place on the page; drawing then happens in CSS pixels, or in smaller ones where the
 * place is narrower than what is drawn needs.
 * @param {HTMLCanvasElement} canvas
 * @param {Surroundings} around
 * @param {number} [least] the width that is needed
 * @returns {Surface | null}
 */
export function openCanvas(canvas, { ratio, wide }, least = 0) {
  const shrink = wide === null ? shrinkOf(canvas, least) : wide / Math.max(1, canvas.clientWidth);
  const width = canvas.clientWidth * shrink;
  const height = canvas.clientHeight * shrink;
  return openBitmap(canvas, width, height, wide === null ? ratio / shrink : ratio);
}

/** A canvas that is drawn on before it has a place on the page. @param {HTMLCanvasElement} canvas @param {number} width @param {number} height @param {number} dense */
export function openBitmap(canvas, width, height, dense) {
  const pen = canvas.getContext("2d");
  if (pen === null || width === 0 || height === 0) return null;
  const [across, down] = [Math.round(width * dense), Math.round(height * dense)];
  // Giving a canvas the size it has is slow.
  if (canvas.width !== across || canvas.height !== down) Object.assign(canvas, { width: across, height: down });
  else pen.reset();
  pen.setTransform(across / width, 0, 0, down / height, 0, 0);
  return { pen, width, height };
}

/**
 * A part of a drawing, with smaller pixels where it is narrower than what is drawn needs.
 * @param {(x: number, y: number) => CanvasRenderingContext2D} penAt
 * @param {{ x: number, y: number, width: number, height: number }} box
 * @param {number} [least]
 * @returns {Surface}
 */
export function surfaceAt(penAt, { x, y, width, height }, least = 0) {
  const pen = penAt(x, y);
  const shrink = Math.max(1, least / width);
  if (shrink > 1) pen.scale(1 / shrink, 1 / shrink);
  return { pen, width: width * shrink, height: height * shrink };
}

/** Drawn pixels in a CSS pixel. @param {HTMLCanvasElement} canvas @param {number} least */
export function shrinkOf(canvas, least) {
  return Math.max(1, least / Math.max(1, canvas.clientWidth));
}
