/** Time points of one response: curves over time in which the map in view is chosen, the moving dipole, and one position over an interval. */

import { layOutCourse, paintCourse } from "../draw/course.js";
import { paintMapDisc } from "../draw/disc.js";
import { instantText, quietText } from "../text/courses.js";
import { enteredNumber, enteredText, timeText, typeset } from "../text/figures.js";
import { mapWords, word } from "../text/words.js";
import { make, need, rewrite } from "./element.js";
import { figureTools, showFigure } from "./figure.js";
import { mapRowFigure } from "./plates.js";
import { writeRows } from "./rows.js";
import { settingId } from "./setting.js";
import { inOne } from "./several.js";
import { keepPainted, paintOn } from "./surface.js";
import { LEAST_VIEWS, SAVED_VIEWS, shellsOf, threeViews } from "./three_views.js";

/** @import { Session } from "../session/session.js" */
/** @import { CourseContent, CoursePlot } from "../draw/course.js" */

/** Pixels across the raster of a map in a figure. */
const INSTANT_RASTER = 64;

/** How far keys go. @type {Record<string, number>} */
const COURSE_STEPS = { ArrowLeft: -1, ArrowDown: -1, ArrowRight: 1, ArrowUp: 1, PageDown: -10, PageUp: 10, Home: -Infinity, End: Infinity };

/** @param {Session} session */
export function showResponse(session) {
  const section = need("response", HTMLDetailsElement);
  const place = need("response-figure", HTMLElement);
  const fault = need("response-fault", HTMLElement);
  const interval = need("fixed", HTMLDetailsElement);
  const fields = ["fixed-from", "fixed-to"].map((id) => need(id, HTMLInputElement));
  const status = need("fixed-status", HTMLElement);
  const take = need("response-take", HTMLButtonElement);
  const [instant, ...edges] = ["response-instant", "fixed-first", "fixed-last"].map((id) => need(id, HTMLElement));
  /** @type {TimeCourse | null} */
  let course = null;
  /** @type {boolean[]} */
  let quiet = [];
  let asked = "";
  /** Tables that the panel was opened for. @type {WeakSet<Inputs>} */
  const opened = new WeakSet();
  /** The tables that the interval is of. @type {Inputs | null} */
  let spanned = null;
  /** First and last time point of the interval. @type {[number, number]} */
  let span = [0, 0];
  /** @type {FixedDipole | null} */
  let fixed = null;
  let fixing = "";

  const radius = () => session.read().answer?.preamble.head.radius_mm ?? 1;
  const chosen = () => session.read().answer?.chosen ?? 0;
  const last = () => (course?.times.length ?? 1) - 1;

  /** @returns {CourseContent | null} */
  function content(/** @type {boolean} */ marked) {
    if (course === null) return null;
    const { times, unit, gfp, gfp_unit: powers, floor, rv, positions, strengths, strength_unit: strength, instants } = course;
    const [moving, one] = [word("response.moving"), word("response.fixed")];
    const [first] = span;
    const percent = (/** @type {(number | null)[]} */ values) => values.map((value) => (value === null ? null : 100 * value));
    const beside = fixed === null || !interval.open ? null : fixed;
    /** @type {CoursePlot[]} */
    const plots = [
      {
        words: `${word("response.gfp")}, ${powers}`,
        lines: [{ name: "", at: 0, values: gfp, first: 0 }],
        level: floor === null ? null : { value: floor.gfp, text: word("response.floor") },
      },
      {
        words: word("response.rv"),
        lines: [{ name: beside === null ? "" : moving, at: 0, values: percent(rv), first: 0 }],
        level: null,
      },
      {
        words: word("response.place"),
        lines: ["x", "y", "z"].map((axis, k) => ({
          name: word(`response.${axis}`),
          at: k,
          values: positions.map((at) => (at === null ? null : radius() * at[k])),
          first: 0,
        })),
        level: null,
      },
    ];
    if (beside !== null) {
      plots[1].lines.push({ name: one, at: 1, values: percent(beside.rv), first });
      plots.push({
        words: `${word("response.strength")}, ${strength}`,
        lines: [
          { name: moving, at: 0, values: strengths, first: 0 },
          { name: one, at: 1, values: beside.strength, first },
        ],
        level: null,
      });
    }
    return {
      times,
      words: unit,
      quiet,
      plots,
      marks: instants.map(({ code, index }) => ({ index, text: code })),
      chosen: marked ? chosen() : -1,
      span: interval.open ? span : null,
    };
  }

  /** Dipoles of all fitted time points, and the one of the interval. */
  function listed() {
    const rows = session.read().answer?.maps ?? [];
    const moving = (course?.positions ?? []).flatMap((position, index) => {
      const row = rows[index];
      if (position === null || row === undefined || !("rv" in row)) return [];
      return [{ position, direction: row.canonical_direction, axis: false, rv: row.rv, at: 0, faint: quiet[index], index }];
    });
    if (fixed === null || !interval.open) return moving;
    return [...moving, { ...fixed, axis: true, rv: 0, at: 1, faint: false, bold: word("response.fixed"), index: span[0] }];
  }
  /** @type {ReturnType<typeof listed>} */
  let dipoles = [];
  const three = threeViews(
    need("response-views", HTMLElement),
    word("response.views"),
    (marked) => ({
      dipoles,
      chosen: marked ? dipoles.findIndex(({ index }) => index === chosen()) : -1,
      byRv: true,
      shells: shellsOf(session.read().answer),
      joined: true,
    }),
    (at) => go(dipoles[at].index),
  );

  /** @param {HTMLElement} handle @param {number} index @param {boolean} shown */
  function placeHandle(handle, index, shown) {
    const now = content(false);
    if (now === null || course === null || index > last()) return;
    const plot = layOutCourse(place.clientWidth, now);
    handle.hidden = !shown;
    Object.assign(handle.style, { left: `${plot.x(index)}px`, top: `${plot.top - 6}px`, height: `${plot.bottom - plot.top + 12}px` });
    handle.setAttribute("aria-valuemax", String(last()));
    handle.setAttribute("aria-valuenow", String(index));
    handle.setAttribute("aria-valuetext", instantText(course, index, radius(), quiet[index]));
  }

  const paint = keepPainted(section, (printing) => {
    const shown = content(printing);
    if (shown === null || course === null || !section.open) return;
    showFigure(place, course.sentence, printing, (width, around, penAt) => paintCourse(width, around, penAt, shown));
    dipoles = listed();
    three.paint(printing);
    paintMap(printing);
    if (!printing) placeHandles();
  });

  /** The map in view, small, so that it is seen while the time point is dragged. @param {boolean} printing */
  function paintMap(printing) {
    const canvas = need("response-map", HTMLCanvasElement);
    const picture = session.read().answer?.sheet?.picture;
    canvas.classList.toggle("waits", picture === undefined);
    if (picture === undefined) return;
    canvas.setAttribute("aria-label", typeset(session.read().answer?.sheet?.alt.measured ?? ""));
    paintOn(canvas, printing, (surface, around) => paintMapDisc(surface, { ...picture, raster: picture.measured, sign: 1, words: mapWords() }, around));
  }

  // Of thousands of time points each takes longer than a key that is held.
  const [paintSoon, paintHeads] = [inOne(() => paint()), inOne(() => three.paint(false))];

  function placeHandles() {
    placeHandle(instant, chosen(), true);
    edges.forEach((edge, k) => placeHandle(edge, span[k], interval.open));
  }

  /** A time point is chosen; the latest wish while one is on its way, -1 otherwise. */
  let wished = -1;
  /** @param {number} index */
  async function go(index) {
    const going = wished >= 0;
    wished = Math.min(last(), Math.max(0, index));
    if (going) return;
    for (let to = -1; to !== wished; ) await session.choose((to = wished));
    wished = -1;
  }

  function tell() {
    if (course === null || chosen() > last()) return;
    rewrite(need("response-readout", HTMLElement), instantText(course, chosen(), radius(), quiet[chosen()]));
    for (const button of need("response-instants", HTMLElement).querySelectorAll("button")) {
      button.setAttribute("aria-pressed", String(Number(button.dataset.index) === chosen()));
    }
    if (!section.open) return;
    placeHandles();
    paintHeads();
  }

  function writeNoise() {
    const { settings } = session.read();
    const noise = course?.noise ?? null;
    rewrite(need("response-noise", HTMLElement), typeset(noise?.sentence ?? ""));
    take.hidden = noise === null;
    const taken = noise !== null && settings.noise != null && "sd" in settings.noise && settings.noise.sd === noise.sd;
    take.disabled = taken;
    rewrite(take, word(taken ? "response.taken" : "response.noise"));
    need("response-baseline", HTMLElement).hidden = noise !== null || document.getElementById(settingId(["baseline", "from"])) === null;
  }

  function write() {
    if (course === null) return;
    const { gfp, rv, floor, sentence, instants, notes, unit } = course;
    const level = floor?.gfp ?? 0;
    quiet = gfp.map((power) => power !== null && power <= level);
    rewrite(need("response-sentence", HTMLElement), typeset(sentence));
    need("response-instants", HTMLElement).replaceChildren(
      ...instants.map(({ index, label }) => {
        const button = make("button", typeset(label), { type: "button", "data-index": String(index) });
        button.addEventListener("click", () => go(index));
        return button;
      }),
    );
    const missing = rv.filter((one) => one === null).length;
    rewrite(need("response-quiet", HTMLElement), quietText(quiet.filter((one) => one).length, gfp.length, missing));
    need("response-notes", HTMLElement).replaceChildren(...notes.map((note) => make("li", typeset(note))));
    rewrite(need("fixed-unit", HTMLElement), unit);
    writeNoise();
    paint();
    tell();
  }

  /** The interval from onset to peak, or what there is. */
  function firstSpan() {
    const places = (course?.instants ?? []).map(({ index }) => index);
    setSpan(places.length > 1 ? [places[0], places[places.length - 1]] : [0, last()]);
  }

  /** @param {[number, number]} next */
  function setSpan([first, end]) {
    span = [Math.min(first, end), Math.max(first, end)];
    fields.forEach((field, k) => {
      field.value = course === null ? "" : enteredText(course.times[span[k]]);
      field.setAttribute("aria-invalid", "false");
    });
    status.textContent = "";
    unfix();
    placeHandles();
    paintSoon();
  }

  /** What was of another interval leaves its room. */
  function unfix() {
    fixed = null;
    need("fixed-found", HTMLElement).classList.add("waits");
  }

  /** Fits one position for the interval. */
  async function fit() {
    const { answer } = session.read();
    if (!section.open || !interval.open || course === null || answer === null) return;
    const [first, end] = span;
    const mine = `${answer.key} ${first} ${end}`;
    if (mine === fixing) return;
    if (fixing !== "" && fixed === null) session.giveUp("fixed");
    fixing = mine;
    const waits = [need("fixed-progress", HTMLElement), need("fixed-stop", HTMLElement)];
    // What is there at once needs no bar.
    const timer = setTimeout(() => waits.forEach((one) => (one.hidden = false)), 200);
    let text = "";
    try {
      const found = await session.fixed(first, end);
      if (mine === fixing) fixed = found;
    } catch (error) {
      const { code, message, hint } = /** @type {Fault} */ (error);
      text = code === "given-up" ? word("course.stopped") : typeset([message, hint].join(" "));
    }
    clearTimeout(timer);
    if (mine !== fixing) return;
    if (fixed === null) fixing = "";
    for (const one of waits) one.hidden = true;
    status.textContent = text;
    need("fixed-found", HTMLElement).classList.toggle("waits", fixed === null);
    need("fixed-sentence", HTMLElement).textContent = typeset(fixed?.sentence ?? "");
    writeRows(need("fixed-rows", HTMLTableElement).tBodies[0], fixed?.rows ?? []);
    paint();
  }
  const fitSoon = inOne(fit);
  need("fixed-stop", HTMLElement).addEventListener("click", () => session.giveUp("fixed"));

  async function ask() {
    const { answer, stopped } = session.read();
    const there = answer?.preamble.understood.columns_are === "time-points" && answer.count > 1;
    section.hidden = !there;
    if (answer === null || !there) return;
    // Of a response the time point is chosen first of all.
    if (!opened.has(answer.inputs)) section.open = true;
    opened.add(answer.inputs);
    if (!section.open) return;
    const mine = `${answer.key} ${answer.fitted === answer.count || stopped}`;
    if (mine === asked) return;
    asked = mine;
    try {
      const found = await session.response();
      if (mine !== asked) return;
      course = found;
      fault.textContent = "";
      if (spanned !== answer.inputs) firstSpan();
      spanned = answer.inputs;
      write();
      if (!fixing.startsWith(`${answer.key} `)) {
        unfix();
        fit();
      }
    } catch (error) {
      if (mine !== asked) return;
      asked = "";
      const { message, hint } = /** @type {Fault} */ (error);
      fault.textContent = typeset([message, hint].join(" "));
    }
  }

  /** @param {PointerEvent} event */
  function under(event) {
    const now = content(false);
    return now === null ? 0 : layOutCourse(place.clientWidth, now).index(event.clientX - place.getBoundingClientRect().left);
  }
  /** @param {HTMLElement} handle @param {number} index */
  function move(handle, index) {
    const at = Math.min(last(), Math.max(0, index));
    if (handle === instant) {
      go(at);
      return;
    }
    // An end does not go past the other.
    setSpan(handle === edges[0] ? [Math.min(at, span[1]), span[1]] : [span[0], Math.max(at, span[0])]);
    if (held === null) fitSoon();
  }
  for (const handle of [instant, ...edges]) {
    handle.addEventListener("keydown", (event) => {
      const step = COURSE_STEPS[event.key];
      if (step === undefined || event.ctrlKey || event.metaKey || event.altKey) return;
      event.preventDefault();
      move(handle, (handle === instant ? (wished < 0 ? chosen() : wished) : span[edges.indexOf(handle)]) + step);
    });
  }
  /** What is dragged. @type {HTMLElement | null} */
  let held = null;
  place.addEventListener("pointerdown", (event) => {
    if (!event.isPrimary || event.button !== 0 || course === null) return;
    const handle = [instant, ...edges].find((one) => one === event.target) ?? null;
    // A finger scrolls the page, unless it takes a handle; a tap is a click.
    if (event.pointerType === "touch" && handle === null) return;
    held = handle ?? instant;
    place.setPointerCapture(event.pointerId);
    if (handle === null) move(held, under(event));
    held.focus({ preventScroll: true });
    event.preventDefault();
  });
  place.addEventListener("pointermove", (event) => {
    if (held !== null) move(held, under(event));
  });
  place.addEventListener("lostpointercapture", () => {
    held = null;
    fitSoon();
  });
  place.addEventListener("click", (event) => {
    if (/** @type {PointerEvent} */ (event).pointerType === "touch") go(under(/** @type {PointerEvent} */ (event)));
  });

  for (const [k, field] of fields.entries()) {
    field.addEventListener("change", () => {
      if (course === null) return;
      const { times } = course;
      const entered = enteredNumber(field.value);
      const good = entered >= times[0] && entered <= times[times.length - 1];
      field.setAttribute("aria-invalid", String(!good));
      status.textContent = good ? "" : `${word("fixed.invalid")} ${timeText(times[0], "")} – ${timeText(times[times.length - 1], course.unit)}`;
      if (!good) return;
      const { index, along } = layOutCourse(SAVED_VIEWS, { times, plots: [] });
      const nearest = index(along(entered));
      setSpan(k === 0 ? [nearest, span[1]] : [span[0], nearest]);
      fit();
    });
  }
  take.addEventListener("click", () => {
    if (course?.noise) session.set({ noise: { sd: course.noise.sd } });
  });
  need("response-baseline", HTMLElement).addEventListener("click", () => {
    const field = document.getElementById(settingId(["baseline", "from"]));
    const folded = field?.closest("details");
    if (folded) folded.open = true;
    field?.focus();
  });
  section.addEventListener("toggle", ask);
  interval.addEventListener("toggle", () => {
    paint();
    fit();
  });

  figureTools(session, need("response-tools", HTMLElement), () => {
    const shown = content(true);
    if (shown === null || course === null) return null;
    return {
      name: "inward-response",
      title: word("response"),
      description: [course.sentence, need("response-readout", HTMLElement).textContent].join(" "),
      width: SAVED_VIEWS,
      least: LEAST_VIEWS,
      paint: (width, around, penAt) => three.save(width, around, penAt, paintCourse(width, around, penAt, shown) + 12),
    };
  }, place);

  figureTools(session, need("instants-tools", HTMLElement), async () => {
    const instants = course?.instants ?? [];
    const maps = await session.thumbnails(session.read().current, instants.map(({ index }) => index), INSTANT_RASTER);
    if (maps === null) return null;
    const drawn = instants.map(({ label }, at) => ({ heading: typeset(label), map: { ...maps, raster: maps.measured[at], sign: 1, words: mapWords() } }));
    return mapRowFigure("inward-instants", word("response.maps"), drawn);
  });

  const askSoon = inOne(ask);
  session.watch(({ answer, stopped }) => `${answer?.key} ${answer?.fitted === answer?.count} ${stopped}`, askSoon);
  session.watch(({ answer }) => answer?.chosen, tell);
  session.watch(({ answer }) => answer?.sheet, () => section.open && paintMap(false));
  session.watch(({ settings }) => settings.noise, writeNoise);
}
