/** When what is painted must be painted again: size, theme, resolution and paper. */

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
