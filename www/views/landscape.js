/**
 * Residual variance over the brain in three slices, and the dipole moved by hand in them: slices, maps and numbers follow. It
 * stays where it was left only if it is kept; the answer remains that of the best fit.
 */

import { LEAST_WIDTH } from "../draw/head.js";
import { leastOf, paintLandscapeBar, paintSlice, pointOnSlice } from "../draw/landscape.js";
import { explainedOf } from "../session/explanations.js";
import { percentText, typeset } from "../text/figures.js";
import { word } from "../text/words.js";
import { make, need } from "./element.js";
import { figureTools } from "./figure.js";
import { HEAD_VIEWS, slicesFigure } from "./plates.js";
import { writeRows } from "./rows.js";
import { keepPainted, paintOn } from "./surface.js";

/** @import { Session } from "../session/session.js" */

/** Millimetres for a press of a key, and with Shift. */
const MOVE_MM = 5;
const FINE_MM = 1;
/** CSS pixels around the dipole within which a finger takes hold of it instead of scrolling. */
const GRASP = 28;

/** The two axes of a slice as seen, to the right and upwards, and the one it is moved along; with their directions. @type {Record<SliceView, [number, number][]>} */
const SLICE_AXES = {
  above: [[0, 1], [1, 1], [2, 1]],
  behind: [[0, 1], [2, 1], [1, 1]],
  left: [[1, -1], [2, 1], [0, 1]],
};

/** Which of a slice's axes a key moves along, and how. @type {Record<string, [number, number]>} */
const SLICE_KEYS = {
  ArrowLeft: [0, -1],
  ArrowRight: [0, 1],
  ArrowDown: [1, -1],
  ArrowUp: [1, 1],
  PageDown: [2, -1],
  PageUp: [2, 1],
};

/** A point of a slice in the head. @param {SliceView} view @param {number[]} at where the slices meet @param {number[]} seen to the right and upwards */
export function pointInHead(view, at, seen) {
  const point = [...at];
  SLICE_AXES[view].slice(0, 2).forEach(([axis, sign], k) => {
    point[axis] = sign * seen[k];
  });
  return point;
}

/** What a key moves by, in the head. @param {SliceView} view @param {string} key @param {number} length @returns {number[] | null} */
export function movedByKey(view, key, length) {
  const move = SLICE_KEYS[key];
  if (move === undefined) return null;
  const [axis, sign] = SLICE_AXES[view][move[0]];
  const by = [0, 0, 0];
  by[axis] = sign * move[1] * length;
  return by;
}

/** @param {Session} session */
export function showLandscape(session) {
  const panel = need("slices", HTMLDetailsElement);
  const bar = need("slices-bar", HTMLCanvasElement);
  const [keep, back, backAbove] = ["hand-keep", "hand-back", "by-hand-back"].map((id) => need(id, HTMLButtonElement));
  const told = () => explainedOf(session.read());
  /** Where the slices meet. */
  const at = () => told().hand?.at ?? told().landscape?.at ?? null;
  const views = HEAD_VIEWS.map(({ view, from, sides }) => ({
    view: /** @type {SliceView} */ (view),
    from,
    letters: sides.map((side) => ({ side, text: word(`map.${side}`) })),
    canvas: need(`slice-${view}`, HTMLCanvasElement),
  }));

  const paint = keepPainted(panel, (printing) => {
    const { landscape, hand, felt } = told();
    const figure = session.read().answer?.sheet?.figure;
    if (landscape === null || figure === undefined) return;
    for (const { view, from, letters, canvas } of views) {
      const slice = landscape.slices.find((one) => one.view === view);
      const content = { landscape, figure, hand, felt, from, letters, seen: word(`view.${view}`) };
      if (slice !== undefined) paintOn(canvas, printing, (surface, around) => paintSlice(surface, { ...content, slice }, around), LEAST_WIDTH);
    }
    paintOn(bar, printing, paintLandscapeBar);
  });

  function giveBack() {
    const inside = back.contains(document.activeElement) || keep.contains(document.activeElement);
    session.returnDipole();
    if (inside) views[0].canvas.focus();
  }

  for (const { view, canvas } of views) {
    /** @param {{ clientX: number, clientY: number }} event */
    const seenAt = (event) => {
      const box = canvas.getBoundingClientRect();
      return pointOnSlice(canvas, event.clientX - box.left, event.clientY - box.top);
    };
    /** @param {{ clientX: number, clientY: number }} event */
    const placeAt = (event) => pointInHead(view, at() ?? [0, 0, 0], seenAt(event));
    /** Whether a finger takes hold of the dipole. @param {{ clientX: number, clientY: number }} event */
    const grasps = (event) => {
      const place = at();
      const [x, y] = seenAt(event);
      if (place === null) return false;
      const [right, up] = SLICE_AXES[view].map(([axis, sign]) => sign * place[axis]);
      return (Math.hypot(right - x, up - y) * canvas.clientWidth) / 2.6 < GRASP;
    };
    canvas.addEventListener("pointerdown", (event) => {
      if (!event.isPrimary || event.button !== 0 || told().landscape === null) return;
      if (event.pointerType === "touch" && !grasps(event)) return;
      canvas.setPointerCapture(event.pointerId);
      session.feel(null);
      session.moveDipole(placeAt(event));
    });
    // A finger on the dipole moves it, elsewhere it scrolls the page.
    canvas.addEventListener(
      "touchstart",
      (event) => {
        if (grasps(event.touches[0])) event.preventDefault();
      },
      { passive: false },
    );
    canvas.addEventListener("pointermove", (event) => {
      if (canvas.hasPointerCapture(event.pointerId)) session.moveDipole(placeAt(event));
      else if (event.pointerType !== "touch") {
        const place = placeAt(event);
        session.feel(Math.hypot(...place) < (told().landscape?.brain ?? 0) ? place : null);
      }
    });
    canvas.addEventListener("pointerleave", () => session.feel(null));
    canvas.addEventListener("keydown", (event) => {
      if (event.ctrlKey || event.metaKey || event.altKey) return;
      const radius = session.read().answer?.preamble.head.radius_mm ?? 1;
      const by = movedByKey(view, event.key, (event.shiftKey ? FINE_MM : MOVE_MM) / radius);
      if (by === null) return;
      event.preventDefault();
      session.moveDipoleBy(by);
    });
  }
  panel.addEventListener("keydown", (event) => {
    if (event.key !== "Escape" || told().hand === null) return;
    event.preventDefault();
    giveBack();
  });
  // What is not kept goes when something else is looked at.
  panel.addEventListener("focusout", ({ relatedTarget }) => {
    const outside = relatedTarget instanceof Node && !panel.contains(relatedTarget);
    if (outside && told().hand?.kept === false) session.returnDipole();
  });
  panel.addEventListener("toggle", () => session.lookAt("slices", panel.open));
  keep.addEventListener("click", () => {
    session.keepDipole();
    back.focus();
  });
  back.addEventListener("click", giveBack);
  backAbove.addEventListener("click", () => {
    session.returnDipole();
    need("sentence", HTMLElement).focus();
  });

  figureTools(session, need("slices-tools", HTMLElement), () => {
    const { landscape, hand } = told();
    const sheet = session.read().answer?.sheet;
    return sheet && landscape && slicesFigure(sheet, landscape, hand);
  }, panel);

  function writeReadout() {
    const { felt, hand } = told();
    const one = felt ?? hand;
    need("slice-readout", HTMLElement).textContent = one === null ? word("slices.hint") : typeset(one.sentence);
  }

  session.watch(
    (state) => explainedOf(state).landscape,
    (landscape) => {
      const room = need("slices-room", HTMLElement);
      room.classList.toggle("waits", landscape === null);
      if (landscape === null) return;
      need("slices-sentence", HTMLElement).textContent = typeset(landscape.sentence);
      for (const { view, canvas } of views) {
        canvas.setAttribute("aria-label", typeset(landscape.slices.find((one) => one.view === view)?.alt ?? ""));
      }
      need("slices-low", HTMLElement).textContent = percentText(leastOf(landscape));
      need("slices-high", HTMLElement).textContent = percentText(1);
      need("slices-levels", HTMLElement).replaceChildren(
        ...landscape.levels.map(({ label }, which) => make("span", typeset(label), { class: which === 0 ? "level" : "level dashed" })),
      );
      paint();
    },
  );
  session.watch((state) => explainedOf(state).felt, () => {
    writeReadout();
    paint();
  });
  session.watch(
    (state) => explainedOf(state).hand,
    (hand) => {
      for (const id of ["hand", "by-hand"]) need(id, HTMLElement).hidden = hand === null;
      keep.hidden = hand?.kept === true;
      need("hand-said", HTMLElement).textContent = word(hand?.kept === true ? "hand.kept" : "hand.not-best");
      writeRows(need("hand-rows", HTMLTableElement).tBodies[0], hand?.rows ?? []);
      writeReadout();
      paint();
    },
  );
}
