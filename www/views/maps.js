/**
 * measured − one dipole = left over, on one scale. Pointing at an electrode shows its values; a click, Space or Enter
 * leaves it out or takes it back.
 */

import { paintBar } from "../draw/bar.js";
import { electrodeOnDisc, paintDisc } from "../draw/disc.js";
import { explainedOf } from "../session/explanations.js";
import { stretchText, typeset } from "../text/figures.js";
import { electrodeText, scaleText, usedText } from "../text/words.js";
import { need } from "./element.js";
import { figureTools } from "./figure.js";
import { discOf, mapAlt, mapsFigure, pictureOf, ROLES, scaleEnds } from "./plates.js";
import { keepPainted, paintOn } from "./surface.js";

/** @import { Session } from "../session/session.js" */

/** CSS pixels from an electrode within which it is meant. */
const REACH = { mouse: 14, pen: 14, touch: 22 };

/** @type {Record<string, [number, number]>} */
const ARROWS = { ArrowLeft: [-1, 0], ArrowRight: [1, 0], ArrowUp: [0, 1], ArrowDown: [0, -1] };

/**
 * The next electrode in a direction: near, and not far to the side.
 * @param {DiscElectrode[]} electrodes
 * @param {number} from
 * @param {[number, number]} direction
 */
function nextElectrode(electrodes, from, [dx, dy]) {
  const start = electrodes[from];
  let best = from;
  let least = Infinity;
  electrodes.forEach(({ x, y }, at) => {
    const along = (x - start.x) * dx + (y - start.y) * dy;
    const across = Math.abs((x - start.x) * dy - (y - start.y) * dx);
    const cost = along + 2 * across;
    if (along > 1e-9 && across <= 2 * along && cost < least) {
      best = at;
      least = cost;
    }
  });
  return best;
}

/** @param {Session} session */
export function showMaps(session) {
  const discs = ROLES.map((role) => ({ role, canvas: need(`map-${role}`, HTMLCanvasElement) }));
  /** Beside the slices in which the dipole is moved. */
  const copies = ROLES.map((role) => ({ role, canvas: need(`hand-${role}`, HTMLCanvasElement) }));
  const bar = need("scale-bar", HTMLCanvasElement);
  const said = need("electrode-said", HTMLElement);
  /** The electrode whose change the keyboard asked for, until it is answered. @type {string | null} */
  let changing = null;

  const paint = keepPainted(need("fitted", HTMLElement), (printing) => {
    const { answer, pointed: label } = session.read();
    if (!answer?.sheet) return;
    const { sheet } = answer;
    const { hand } = explainedOf(session.read());
    const { picture } = pictureOf(sheet, hand);
    const pointed = printing ? -1 : picture.electrodes.findIndex((electrode) => electrode.label === label);
    for (const { role, canvas } of hand === null ? discs : [...discs, ...copies]) {
      paintOn(canvas, printing, (surface, around) => paintDisc(surface, discOf(sheet, role, hand, pointed), around));
    }
    paintOn(bar, printing, (surface, around) => paintBar(surface, picture, around));
  });

  /** Index of the electrode pointed at. @param {Picture} picture */
  const pointedOn = (picture) => picture.electrodes.findIndex(({ label }) => label === session.read().pointed);

  /** @param {Sheet} sheet @param {number} at */
  const toggle = ({ picture }, at) => {
    const { label } = picture.electrodes[at];
    session.use(label, (session.read().settings.exclude ?? []).includes(label));
  };

  /** @param {KeyboardEvent} event */
  function takeKey(event) {
    const sheet = session.read().answer?.sheet;
    if (!sheet || event.ctrlKey || event.metaKey || event.altKey) return;
    const { electrodes, extremes } = sheet.picture;
    const at = pointedOn(sheet.picture);
    const arrow = ARROWS[event.key];
    if (arrow !== undefined) {
      const next = at < 0 ? extremes.measured.max : nextElectrode(electrodes, at, arrow);
      session.point(electrodes[next].label);
      said.textContent = typeset(electrodeText(sheet.electrodes[next], sheet.scale.unit));
    } else if ((event.key === " " || event.key === "Enter") && at >= 0) {
      if (!event.repeat) {
        changing = electrodes[at].label;
        toggle(sheet, at);
      }
    } else if (event.key === "Escape" && at >= 0) {
      session.point(null);
    } else {
      return;
    }
    event.preventDefault();
  }

  for (const { canvas } of discs) {
    /** @param {PointerEvent} event */
    const under = (event) => {
      const picture = session.read().answer?.sheet?.picture;
      if (picture === undefined) return null;
      const reach = event.pointerType === "touch" ? REACH.touch : REACH.mouse;
      const box = canvas.getBoundingClientRect();
      const at = electrodeOnDisc(canvas, picture, event.clientX - box.left, event.clientY - box.top, reach);
      return at < 0 ? null : picture.electrodes[at].label;
    };
    canvas.addEventListener("pointermove", (event) => {
      if (event.pointerType === "touch") return;
      const label = under(event);
      canvas.style.cursor = label === null ? "" : "pointer";
      session.point(label);
    });
    canvas.addEventListener("pointerleave", (event) => {
      if (event.pointerType !== "touch") session.point(null);
    });
    canvas.addEventListener("click", (event) => {
      // Older browsers send clicks as mouse events.
      if (!(event instanceof MouseEvent)) return;
      const pointer = /** @type {PointerEvent} */ (event);
      const sheet = session.read().answer?.sheet;
      const label = under(pointer);
      // A finger cannot hover: its first tap points, the second one changes.
      const points = pointer.pointerType === "touch" && label !== session.read().pointed;
      session.point(label);
      if (sheet && label !== null && !points) toggle(sheet, pointedOn(sheet.picture));
    });
    canvas.addEventListener("focus", () => {
      const sheet = session.read().answer?.sheet;
      if (!sheet || session.read().pointed !== null || !canvas.matches(":focus-visible")) return;
      session.point(sheet.picture.electrodes[sheet.picture.extremes.measured.max].label);
    });
    canvas.addEventListener("blur", () => session.point(null));
    canvas.addEventListener("keydown", takeKey);
  }

  /** What the maps are, in words; moved by hand they are no longer those of the fit. */
  function describe() {
    const sheet = session.read().answer?.sheet;
    if (!sheet) return;
    const { hand } = explainedOf(session.read());
    const { stretch } = pictureOf(sheet, hand).picture;
    for (const { role, canvas } of [...discs, ...copies]) canvas.setAttribute("aria-label", mapAlt(sheet, role, hand));
    const stretched = stretch === 1 ? "" : stretchText(stretch);
    for (const id of ["stretch", "hand-stretch"]) need(id, HTMLElement).textContent = stretched;
    need("scale-words", HTMLElement).textContent = scaleText(sheet.scale.unit, stretched);
    need("map-by-hand", HTMLElement).hidden = hand === null;
  }
  session.watch(
    (state) => explainedOf(state).hand,
    () => {
      describe();
      paint();
    },
  );

  session.watch(
    (state) => state.answer?.sheet,
    (sheet) => {
      if (!sheet) return;
      const { electrodes } = sheet;
      const { low, high } = scaleEnds(sheet);
      need("scale-low", HTMLElement).textContent = low;
      need("scale-high", HTMLElement).textContent = high;
      describe();
      const changed = electrodes.find(({ label }) => label === changing);
      if (changed !== undefined) said.textContent = usedText(changed, electrodes);
      changing = null;
      paint();
    },
    "first",
  );
  session.watch((state) => state.pointed, paint);
  figureTools(session, need("maps-tools", HTMLElement), () => {
    const sheet = session.read().answer?.sheet;
    return sheet && mapsFigure(sheet, explainedOf(session.read()).hand);
  }, need("maps-tools", HTMLElement));
  figureTools(session, need("hand-tools", HTMLElement), () => {
    const sheet = session.read().answer?.sheet;
    return sheet && { ...mapsFigure(sheet, explainedOf(session.read()).hand), name: "inward-by-hand" };
  }, need("hand-tools", HTMLElement));
}
