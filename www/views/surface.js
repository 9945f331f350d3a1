/** Painting a canvas of the page, and when that must be done again: size, theme, resolution and paper. */

import { openCanvas, surroundingsOf } from "../draw/canvas.js";

/** @import { Surface, Surroundings } from "../draw/canvas.js" */

/**
 * @param {HTMLCanvasElement} canvas
 * @param {boolean} printing
 * @param {(surface: Surface, around: Surroundings) => void} paint
 * @param {number} [least] the width that what is painted needs
 */
export function paintOn(canvas, printing, paint, least) {
  const around = surroundingsOf(canvas, printing);
  const surface = openCanvas(canvas, around, least);
  if (surface !== null) paint(surface, around);
}

/** The query names one resolution, so it is asked anew after every change. @param {() => void} paint */
function watchRatio(paint) {
  const query = matchMedia(`(resolution: ${devicePixelRatio}dppx)`);
  const changed = () => {
    paint();
    watchRatio(paint);
  };
  query.addEventListener("change", changed, { once: true });
}

/**
 * @param {HTMLElement} frame whose size the pictures follow
 * @param {(printing: boolean) => void} paint
 * @returns {() => void} paints now
 */
export function keepPainted(frame, paint) {
  let printing = false;
  const now = () => paint(printing);
  new ResizeObserver(now).observe(frame);
  for (const query of ["(prefers-color-scheme: dark)", "(forced-colors: active)"]) {
    matchMedia(query).addEventListener("change", now);
  }
  watchRatio(now);
  for (const name of /** @type {const} */ (["beforeprint", "afterprint"])) {
    addEventListener(name, () => {
      printing = name === "beforeprint";
      now();
    });
  }
  return now;
}
