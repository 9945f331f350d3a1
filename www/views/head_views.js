/** Where the equivalent dipole lies: from above, behind and the left, and from wherever the head is turned to. */

import { electrodeOnHead, LEAST_WIDTH, paintHead } from "../draw/head.js";
import { explainedOf } from "../session/explanations.js";
import { typeset } from "../text/figures.js";
import { beginning } from "../text/trust.js";
import { standpointText, word } from "../text/words.js";
import { need } from "./element.js";
import { figureTools } from "./figure.js";
import { HEAD_VIEWS, headFigure, headOf, OBLIQUE } from "./plates.js";
import { keepPainted, paintOn } from "./surface.js";
import { isMarkShown, regionMarks } from "./trust.js";

/** @import { Session } from "../session/session.js" */
/** @import { HeadContent, Side, Standpoint } from "../draw/head.js" */

/**
 * @typedef {object} PaintedView
 * @property {HeadView} view
 * @property {HTMLCanvasElement} canvas
 * @property {() => Standpoint} from
 * @property {Side[]} sides
 * @property {() => string} seen
 */

/** Degrees for a press of a key or button, and for a CSS pixel of dragging. */
const STEP = 10;
const DRAG = 0.5;
const POINT_REACH = 12;

/** What turns the head: the near side goes where the key or the hand goes. @type {Record<string, [number, number]>} */
const TURNS = { ArrowLeft: [-STEP, 0], ArrowRight: [STEP, 0], ArrowUp: [0, -STEP], ArrowDown: [0, STEP] };

/** @type {[string, [number, number]][]} */
const TURN_BUTTONS = [
  ["turn-left", TURNS.ArrowLeft],
  ["turn-right", TURNS.ArrowRight],
  ["tilt-up", TURNS.ArrowUp],
  ["tilt-down", TURNS.ArrowDown],
];

/** @param {Session} session */
export function showHeadViews(session) {
  const turned = need("view-turned", HTMLCanvasElement);
  const live = need("turned-from", HTMLElement);
  /** @type {Standpoint} */
  let standpoint = OBLIQUE;
  let dragging = false;
  /** @type {PaintedView[]} */
  const views = HEAD_VIEWS.map(({ view, from, sides }) => ({
    view,
    canvas: need(`view-${view}`, HTMLCanvasElement),
    from: () => from,
    sides,
    seen: () => word(`view.${view}`),
  }));
  views.push({
    view: "turned",
    canvas: turned,
    from: () => standpoint,
    sides: ["left", "right", "front"],
    seen: () => standpointText(standpoint.turn, standpoint.tilt),
  });

  /**
   * @param {PaintedView} view
   * @param {boolean} printing
   * @returns {HeadContent | null}
   */
  function contentOf({ from, sides, seen }, printing) {
    const { answer, pointed: label } = session.read();
    if (!answer?.sheet) return null;
    const pointed = printing ? -1 : answer.sheet.picture.electrodes.findIndex((electrode) => electrode.label === label);
    return { ...headOf(answer.sheet, regionMarks(session.read()), from(), sides, seen()), pointed };
  }

  /** @param {PaintedView[]} which @param {boolean} printing */
  function paintViews(which, printing) {
    for (const view of which) {
      const content = contentOf(view, printing);
      if (content !== null) paintOn(view.canvas, printing, (surface, around) => paintHead(surface, content, around), LEAST_WIDTH);
    }
  }
  const paint = keepPainted(need("fitted", HTMLElement), (printing) => paintViews(views, printing));

  const say = () => {
    live.textContent = standpointText(standpoint.turn, standpoint.tilt);
  };
  say();

  /** @param {Standpoint} next */
  function look({ turn, tilt }) {
    standpoint = { turn: ((turn % 360) + 360) % 360, tilt: Math.min(90, Math.max(-90, tilt)) };
    paintViews(views.slice(-1), false);
    // A hand that drags is told where it arrived.
    if (!dragging) say();
  }
  /** @param {[number, number]} by */
  const turnBy = ([turn, tilt]) => look({ turn: standpoint.turn + turn, tilt: standpoint.tilt + tilt });

  for (const [id, by] of TURN_BUTTONS) need(id, HTMLButtonElement).addEventListener("click", () => turnBy(by));
  need("turn-back", HTMLButtonElement).addEventListener("click", () => look(OBLIQUE));
  turned.addEventListener("keydown", (event) => {
    const by = TURNS[event.key];
    if (event.ctrlKey || event.metaKey || event.altKey || (by === undefined && event.key !== "Home")) return;
    event.preventDefault();
    if (by === undefined) look(OBLIQUE);
    else turnBy(by);
  });
  /** Where the hand was last while it drags. A finger that sets out up or down scrolls the page instead. */
  let held = { x: 0, y: 0, turns: false };
  turned.addEventListener("pointerdown", (event) => {
    if (!event.isPrimary || event.button !== 0) return;
    held = { x: event.clientX, y: event.clientY, turns: event.pointerType !== "touch" };
    turned.setPointerCapture(event.pointerId);
    dragging = true;
    session.point(null);
  });
  turned.addEventListener("lostpointercapture", () => {
    dragging = false;
    say();
  });

  for (const view of views) {
    view.canvas.addEventListener("pointermove", (event) => {
      if (view.canvas.hasPointerCapture(event.pointerId)) {
        const [dx, dy] = [event.clientX - held.x, event.clientY - held.y];
        if (!held.turns && Math.abs(dx) <= Math.abs(dy)) return;
        turnBy([DRAG * dx, DRAG * dy]);
        held = { x: event.clientX, y: event.clientY, turns: true };
        return;
      }
      const content = event.pointerType === "touch" ? null : contentOf(view, false);
      if (content === null) return;
      const box = view.canvas.getBoundingClientRect();
      const at = electrodeOnHead(view.canvas, content, event.clientX - box.left, event.clientY - box.top, POINT_REACH);
      session.point(at < 0 ? null : content.electrodes[at].label);
    });
    view.canvas.addEventListener("pointerleave", (event) => {
      if (event.pointerType !== "touch") session.point(null);
    });
  }

  session.watch(
    (state) => state.answer?.sheet,
    (sheet) => {
      if (!sheet) return;
      for (const { view, canvas } of views) canvas.setAttribute("aria-label", sheet.alt[view]);
      need("where-words", HTMLElement).textContent =
        `${word(sheet.figure.axis ? "where.axis" : "where.arrow")} ${word("where.lines")}`;
      paint();
    },
  );
  session.watch((state) => state.pointed, paint);
  session.watch((state) => explainedOf(state).hand, paint);
  session.watch(
    (state) => explainedOf(state).alternatives,
    (others) => {
      need("others-alt", HTMLElement).textContent = beginning(others?.alt ?? "");
      paint();
    },
  );
  session.watch(
    ({ answer }) => answer?.trust,
    (trust) => {
      need("region-alt", HTMLElement).textContent = typeset(trust?.region.alt ?? "");
      paint();
    },
  );
  need("region-legend", HTMLElement).addEventListener("change", paint);
  figureTools(session, need("views-tools", HTMLElement), () => {
    const { answer } = session.read();
    if (!answer?.sheet) return null;
    return headFigure(answer.sheet, { region: answer.trust?.region, ...explainedOf(session.read()) }, { turned: standpoint, shown: isMarkShown });
  }, need("views-tools", HTMLElement));
}
