/** measured − one dipole = left over, on one scale. Painted again whenever size, theme or medium change. */

import { paintBar } from "../draw/bar.js";
import { surroundingsOf } from "../draw/canvas.js";
import { paintDisc } from "../draw/disc.js";
import { stretchText } from "../text/figures.js";
import { scaleText, word } from "../text/words.js";
import { need } from "./element.js";

/** @import { Session } from "../session/session.js" */

/** @type {MapRole[]} */
const ROLES = ["measured", "projected", "residual"];

/** The query names one resolution, so it is asked anew after every change. @param {() => void} paint */
function watchRatio(paint) {
  const query = matchMedia(`(resolution: ${devicePixelRatio}dppx)`);
  const changed = () => {
    paint();
    watchRatio(paint);
  };
  query.addEventListener("change", changed, { once: true });
}

/** @param {Session} session */
export function showMaps(session) {
  const discs = ROLES.map((role) => ({ role, canvas: need(`map-${role}`, HTMLCanvasElement) }));
  const bar = need("scale-bar", HTMLCanvasElement);
  const words = {
    front: word("map.front"),
    left: word("map.left"),
    right: word("map.right"),
    above: word("map.above"),
  };
  let printing = false;

  function paint() {
    const picture = session.read().answer?.sheet?.picture;
    if (picture === undefined) return;
    for (const { role, canvas } of discs) {
      const stretched = role === "residual" && picture.stretch !== 1 ? stretchText(picture.stretch) : "";
      paintDisc(
        canvas,
        { picture, role, dipole: role === "projected", stretched, words },
        surroundingsOf(canvas, printing),
      );
    }
    paintBar(bar, picture, surroundingsOf(bar, printing));
  }

  session.watch(
    (state) => state.answer?.sheet,
    (sheet) => {
      if (!sheet) return;
      const { picture, alt, scale } = sheet;
      for (const { role, canvas } of discs) canvas.setAttribute("aria-label", alt[role]);
      need("scale-low", HTMLElement).textContent = `\u2212${scale.limit}`;
      need("scale-high", HTMLElement).textContent = `+${scale.limit} ${scale.unit}`;
      const stretched = picture.stretch === 1 ? "" : stretchText(picture.stretch);
      need("stretch", HTMLElement).textContent = stretched;
      need("scale-words", HTMLElement).textContent = scaleText(stretched);
      paint();
    },
  );

  new ResizeObserver(paint).observe(need("fitted", HTMLElement));
  for (const query of ["(prefers-color-scheme: dark)", "(forced-colors: active)"]) {
    matchMedia(query).addEventListener("change", paint);
  }
  watchRatio(paint);
  for (const [name, now] of /** @type {const} */ ([
    ["beforeprint", true],
    ["afterprint", false],
  ])) {
    addEventListener(name, () => {
      printing = now;
      paint();
    });
  }
}
