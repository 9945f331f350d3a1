/**
 * The maps of the decomposition that is shown, as a ledger: a line each with its pattern, its residual variance on a
 * common scale and its place, grouped and ordered as wanted. Only the lines in view are elements, so that 65,536 maps
 * scroll like ten.
 */

import { freshMaps } from "../session/decompositions.js";
import { openBitmap, surroundingsOf } from "../draw/canvas.js";
import { verdictMark } from "../draw/region.js";
import { paintThumbnail } from "../draw/thumbnail.js";
import { enteredNumber, enteredText, typeset } from "../text/figures.js";
import { cellText, groupText, listedText, mapText, dipolePlaceText, rvLimitText, stepText, word } from "../text/words.js";
import { make, need } from "./element.js";
import { countsOf, ledgerOf, VERDICTS } from "./ledger.js";
import { keepPainted } from "./surface.js";

/** @import { Session } from "../session/session.js" */
/** @import { Surroundings } from "../draw/canvas.js" */
/** @import { LedgerGroup, LedgerView } from "./ledger.js" */

/** Height of a line, in rem; the style sheet has the same. */
const LINE = 2.875;
/** The disc in it, in CSS pixels. */
const DISC = 38;
/** Pixels of a raster to a side. */
const RASTER = 32;
/** Lines above and below those in view. */
const BEYOND = 6;
/** Rasters that are kept. */
const MOST_PICTURES = 800;
/** Letters typed within so long belong together. */
const TYPING_MS = 900;
/** Tables from here on have a field for a map's number. */
const LONG = 100;
/** The scale of residual variance goes from a thousandth to one, in equal steps of its logarithm. */
const DECADES = 3;

/** Place on the scale, from 0 to 1. @param {number} rv */
function placeOnScale(rv) {
  return rv > 0 ? Math.min(1, Math.max(0, 1 + Math.log10(rv) / DECADES)) : 0;
}

/** What a line is: an index of a map, or the heading of a group. @typedef {{ group: number, index: number | null }} Line */

/** @typedef {{ element: HTMLElement, canvas: HTMLCanvasElement, name: HTMLElement, mark: HTMLElement, verdict: HTMLElement, place: HTMLElement, dot: HTMLElement, rv: HTMLElement, map: object | null, painted: Float32Array | null }} Row */

/** @returns {Row} */
function makeRow() {
  const element = make("div", "", { role: "option", class: "ledger-row" });
  const canvas = document.createElement("canvas");
  canvas.setAttribute("aria-hidden", "true");
  const words = make("span", "", { class: "ledger-words" });
  const [name, mark, verdict, place, scale, dot, rv] = ["name", "mark", "verdict", "place", "scale", "dot", "rv"].map((part) =>
    make("span", "", { class: `ledger-${part}` }),
  );
  mark.textContent = word("ledger.boundary");
  const title = make("span", "", { class: "ledger-title" });
  title.append(name, " ", mark, " ", verdict);
  words.append(title, " ", place);
  scale.append(dot);
  element.append(canvas, words, scale, " ", rv);
  return { element, canvas, name, mark, verdict, place, dot, rv, map: null, painted: null };
}

/** @param {Session} session */
export function showOverview(session) {
  const frame = need("overview", HTMLElement);
  const list = need("ledger", HTMLElement);
  const inner = need("ledger-lines", HTMLElement);
  const order = need("ledger-order", HTMLSelectElement);
  const grouping = need("ledger-grouping", HTMLSelectElement);
  const most = need("ledger-most", HTMLInputElement);
  const slider = need("ledger-slider", HTMLInputElement);
  const previous = need("map-previous", HTMLButtonElement);
  const next = need("map-next", HTMLButtonElement);
  const number = need("map-number", HTMLInputElement);

  /** @type {LedgerView} */
  const view = { order: "rv", grouping: "band", most: Infinity, verdict: "" };
  /** Whether order and grouping were chosen by hand. */
  let chosen = false;
  /** @type {LedgerGroup[]} */
  let groups = [];
  /** @type {Line[]} */
  let lines = [];
  /** Indexes of the maps in the order of the list. @type {number[]} */
  let sequence = [];
  /** Of each map its line. @type {Map<number, number>} */
  let lineOf = new Map();
  /** @type {Map<number, Row>} */
  const rows = new Map();
  /** @type {Map<string, HTMLElement>} */
  const boxes = new Map();
  /** Line of each group's heading. @type {number[]} */
  let starts = [];
  /** Pictures by map, with the key of the answer they are of. @type {Map<number, { key: number, raster: Float32Array }>} */
  const pictures = new Map();
  /** @type {Float32Array} */
  let outline = new Float32Array();
  let asking = false;
  /** What the lines are of. */
  let key = 0;
  /** @type {Inputs | null} */
  let inputs = null;
  /** @type {Answer["verdicts"]} */
  let verdicts = null;
  /** What was chosen last here, which the session may not have taken over yet. */
  let active = -1;
  let line = 46;

  const answer = () => session.read().answer;

  /** Place of a map in the list, or -1. @param {number} index */
  function positionOf(index) {
    const at = lineOf.get(index);
    return at === undefined ? -1 : at - lines[at].group - (groups[0].code === "" ? 0 : 1);
  }

  /* Choosing */

  let choosing = false;
  /** While one choice is being answered, only the last of the next ones counts. @param {number} index */
  async function choose(index) {
    active = index;
    render();
    if (choosing) return;
    choosing = true;
    try {
      for (let last = -1; last !== active; ) {
        last = active;
        await session.choose(last);
      }
    } finally {
      choosing = false;
    }
  }

  /** @param {number} index */
  function bringIntoView(index) {
    const at = lineOf.get(index);
    if (at === undefined) return;
    // The heading above the first of a group belongs to it.
    const top = line * (at > 0 && lines[at - 1].index === null ? at - 1 : at);
    if (top < list.scrollTop) list.scrollTop = top;
    else if (line * (at + 1) > list.scrollTop + list.clientHeight) list.scrollTop = line * (at + 1) - list.clientHeight;
  }

  /** @param {number} index */
  function goTo(index) {
    choose(index);
    bringIntoView(index);
    render();
  }

  /** Where answer and list do not stand side by side, the answer comes into view. */
  function showAnswerBelow() {
    const body = need("answer-body", HTMLElement);
    if (body.getBoundingClientRect().top > list.getBoundingClientRect().bottom - 1) body.scrollIntoView({ block: "start" });
  }

  /** @param {number} by */
  function step(by) {
    const at = positionOf(active);
    return at < 0 ? sequence[0] : sequence[Math.min(sequence.length - 1, Math.max(0, at + by))];
  }

  let typed = "";
  let typedAt = 0;
  /** A map by its number or by how its name begins, from the chosen one on. @param {KeyboardEvent} event */
  function typedFor({ key: letter, timeStamp }) {
    typed = (timeStamp - typedAt > TYPING_MS ? "" : typed) + letter.toLowerCase();
    typedAt = timeStamp;
    const from = Math.max(0, positionOf(active) + (typed.length === 1 ? 1 : 0));
    const all = [...sequence.slice(from), ...sequence.slice(0, from)];
    const named = (/** @type {number} */ at) => answer()?.maps[at].name.toLowerCase().startsWith(typed);
    return all.find((at) => String(at + 1) === typed) ?? all.find(named) ?? active;
  }

  list.addEventListener("keydown", (event) => {
    if (event.ctrlKey || event.metaKey || event.altKey || sequence.length === 0) return;
    const page = Math.max(1, Math.floor(list.clientHeight / line) - 1);
    /** @type {Record<string, () => number>} */
    const keys = {
      ArrowDown: () => step(1),
      ArrowUp: () => step(-1),
      PageDown: () => step(page),
      PageUp: () => step(-page),
      Home: () => sequence[0],
      End: () => sequence[sequence.length - 1],
    };
    if (event.key === "Enter") {
      showAnswerBelow();
      need("sentence", HTMLElement).focus({ preventScroll: true });
    } else if (keys[event.key] !== undefined) goTo(keys[event.key]());
    else if ([...event.key].length === 1 && (event.key !== " " || typed !== "")) goTo(typedFor(event));
    else return;
    event.preventDefault();
  });
  inner.addEventListener("click", (event) => {
    const element = event.target instanceof Element ? event.target.closest("[data-index]") : null;
    if (!(element instanceof HTMLElement)) return;
    choose(Number(element.dataset.index));
    showAnswerBelow();
  });
  for (const [button, by] of /** @type {const} */ ([
    [previous, -1],
    [next, 1],
  ])) {
    button.addEventListener("click", () => goTo(step(by)));
  }
  number.addEventListener("change", () => {
    const index = number.valueAsNumber - 1;
    if (answer()?.maps[index] !== undefined) goTo(index);
  });

  /* What is listed */

  /** @param {number} value */
  function setMost(value) {
    view.most = value >= 1 ? Infinity : value;
    slider.value = String(placeOnScale(Math.min(1, value)) * Number(slider.max));
    slider.setAttribute("aria-valuetext", rvLimitText(view.most));
    most.value = enteredText(Math.min(100, 100 * value));
    most.setAttribute("aria-invalid", "false");
    arrange(true);
  }
  slider.addEventListener("input", () => {
    const value = 10 ** (DECADES * (slider.valueAsNumber / Number(slider.max) - 1));
    setMost(Number(value.toPrecision(2)));
  });
  most.addEventListener("change", () => {
    const value = most.value.trim() === "" ? 100 : enteredNumber(most.value);
    if (value > 0 && value <= 100) setMost(value / 100);
    else most.setAttribute("aria-invalid", "true");
  });
  const verdict = need("ledger-verdict", HTMLSelectElement);
  verdict.append(...VERDICTS.map((one) => make("option", word(`verdict.${one}`), { value: one })));
  verdict.addEventListener("change", () => {
    view.verdict = verdict.value;
    arrange(true);
  });
  /** Without verdicts there is nothing to choose by them. */
  function offerVerdicts() {
    const some = answer()?.verdicts != null;
    for (const element of document.querySelectorAll(".by-verdict")) {
      if (element instanceof HTMLOptionElement) element.disabled = !some;
      else if (element instanceof HTMLElement) element.hidden = !some;
    }
    if (!some) view.verdict = verdict.value = "";
  }
  for (const field of [order, grouping]) {
    field.addEventListener("change", () => {
      chosen = true;
      take();
      refill();
      arrange(true);
    });
  }
  function take() {
    view.order = /** @type {LedgerView["order"]} */ (order.value);
    view.grouping = /** @type {LedgerView["grouping"]} */ (grouping.value);
  }

  function refill() {
    for (const row of rows.values()) row.map = null;
  }

  /** How long arranging took last; of long tables it waits in between. */
  let took = 0;
  let timer = 0;
  function arrangeSoon() {
    if (timer !== 0) return;
    timer = setTimeout(() => {
      timer = 0;
      arrange();
    }, 5 * took);
  }

  /** @param {boolean} [anew] another order: begins where the chosen one is */
  function arrange(anew = false) {
    const held = answer();
    if (held === null || held.count < 2) return;
    const start = performance.now();
    const top = Math.floor(list.scrollTop / line);
    const anchor = lines[top]?.index ?? lines[top + 1]?.index ?? null;
    const offset = list.scrollTop - line * (lineOf.get(anchor ?? -1) ?? 0);
    groups = ledgerOf(held.maps, view, held.verdicts);
    lines = [];
    sequence = [];
    starts = [];
    lineOf = new Map();
    groups.forEach(({ code, indexes }, group) => {
      starts.push(lines.length);
      if (code !== "") lines.push({ group, index: null });
      for (const index of indexes) {
        lineOf.set(index, lines.length);
        lines.push({ group, index });
        sequence.push(index);
      }
    });
    inner.style.height = `${line * lines.length}px`;
    // With its two rules; a short list ends with its last line.
    list.style.maxHeight = `${line * lines.length + 2}px`;
    need("ledger-count", HTMLElement).textContent = listedText(sequence.length, countsOf(freshMaps(held), 1).here, held.count);
    need("ledger-none", HTMLElement).hidden = sequence.length > 0;
    if (anew) {
      list.scrollTop = 0;
      bringIntoView(active);
    } else if (list.scrollTop > 0 && anchor !== null && lineOf.has(anchor)) {
      // What was on top stays there.
      list.scrollTop = line * /** @type {number} */ (lineOf.get(anchor)) + offset;
    }
    render();
    session.setListed(sequence);
    took = performance.now() - start;
  }

  /* What is drawn */

  /** @param {Row} row @param {Answer} held @param {number} index */
  function fill(row, held, index) {
    const map = held.maps[index];
    row.element.id = `map-${index}`;
    row.element.dataset.index = String(index);
    row.name.textContent = mapText(held, index);
    const failed = "error" in map;
    row.place.textContent = typeset(failed ? map.error.message : dipolePlaceText(map, session.read().columns, view.order));
    row.place.classList.toggle("warm", failed);
    const verdict = held.verdicts?.[index];
    row.mark.hidden = failed || !map.at_boundary || verdict === "edge";
    row.verdict.replaceChildren(...(verdict ? [verdictMark(verdict), " ", word(`verdict.${verdict}`)] : []));
    row.verdict.dataset.verdict = verdict ?? "";
    row.element.title = failed ? typeset(map.error.message) : "";
    row.rv.textContent = failed ? "" : typeset(cellText(map, session.read().columns, "rv"));
    row.element.classList.toggle("failed", failed);
    row.dot.hidden = failed;
    if (!failed) row.dot.style.setProperty("--at", String(placeOnScale(map.rv)));
    row.map = map;
  }

  /** @param {number} group */
  function boxOf(group) {
    const { code, indexes } = groups[group];
    if (code === "") return inner;
    let box = boxes.get(code);
    if (box === undefined) {
      box = make("div", "", { role: "group" });
      box.append(make("div", "", { class: "ledger-heading", "aria-hidden": "true" }));
      boxes.set(code, box);
    }
    const heading = /** @type {HTMLElement} */ (box.firstElementChild);
    const text = groupText(code, indexes.length);
    if (heading.textContent !== text) {
      heading.textContent = text;
      box.setAttribute("aria-label", text);
    }
    return box;
  }

  function render() {
    const held = answer();
    if (held === null || frame.hidden) return;
    const first = Math.max(0, Math.floor(list.scrollTop / line) - BEYOND);
    const last = Math.min(lines.length, Math.ceil((list.scrollTop + list.clientHeight) / line) + BEYOND);
    /** @type {Map<HTMLElement, HTMLElement[]>} */
    const wanted = new Map();
    const shown = new Set();
    /** @param {number} at */
    const place = (at) => {
      const { group, index } = lines[at];
      const box = boxOf(group);
      const children = wanted.get(box) ?? (box === inner ? [] : [/** @type {HTMLElement} */ (box.firstElementChild)]);
      wanted.set(box, children);
      if (index === null || shown.has(index)) return;
      shown.add(index);
      let row = rows.get(index);
      if (row === undefined) {
        row = makeRow();
        rows.set(index, row);
      }
      if (row.map !== held.maps[index]) fill(row, held, index);
      row.element.style.top = `${line * at}px`;
      row.element.setAttribute("aria-selected", String(index === active));
      row.element.setAttribute("aria-setsize", String(sequence.length));
      row.element.setAttribute("aria-posinset", String(positionOf(index) + 1));
      children.push(row.element);
    };
    const own = lineOf.get(active);
    if (own !== undefined && own < first) place(own);
    for (let at = first; at < last; at++) place(at);
    if (own !== undefined && own >= last) place(own);
    for (const index of [...rows.keys()]) if (!shown.has(index)) rows.delete(index);

    const headed = [...wanted.keys()].filter((box) => box !== inner);
    keepChildren(inner, [...(wanted.get(inner) ?? []), ...headed]);
    for (const box of headed) {
      const children = /** @type {HTMLElement[]} */ (wanted.get(box));
      keepChildren(box, children);
      children[0].style.top = `${line * starts[groups.findIndex(({ code }) => boxes.get(code) === box)]}px`;
    }
    if (own === undefined) list.removeAttribute("aria-activedescendant");
    else list.setAttribute("aria-activedescendant", `map-${active}`);
    const at = positionOf(active);
    end(previous, at === 0 || sequence.length === 0);
    end(next, at === sequence.length - 1);
    need("map-step", HTMLElement).textContent = stepText(at + 1, sequence.length);
    paint();
  }

  /** A step that leads nowhere hands the focus on. @param {HTMLButtonElement} button @param {boolean} over */
  function end(button, over) {
    if (over && document.activeElement === button) list.focus();
    button.disabled = over;
  }

  /* Small pictures */

  function paint() {
    /** @type {Surroundings | null} */
    let around = null;
    for (const [index, row] of rows) {
      const raster = pictures.get(index)?.raster ?? null;
      if (row.painted === raster && row.canvas.width === Math.round(DISC * devicePixelRatio)) continue;
      around ??= surroundingsOf(row.canvas, false);
      const surface = openBitmap(row.canvas, DISC, DISC, around.ratio);
      if (surface !== null) paintThumbnail(surface, raster && { size: RASTER, outline, raster }, around);
      row.painted = raster;
    }
    askPictures().catch(session.fail);
  }

  /** Those in view that are not there yet, in one batch after the other. */
  async function askPictures() {
    const held = answer();
    if (asking || held === null) return;
    const missing = [...rows.keys()].filter((index) => pictures.get(index)?.key !== held.key);
    if (missing.length === 0) return;
    asking = true;
    const given = await session.thumbnails(session.read().current, missing, RASTER).finally(() => {
      asking = false;
    });
    if (answer()?.key === held.key) {
      outline = given?.outline ?? outline;
      const blank = new Float32Array(RASTER * RASTER).fill(NaN);
      missing.forEach((index, at) => {
        pictures.delete(index);
        pictures.set(index, { key: held.key, raster: given?.measured[at] ?? blank });
      });
      for (const index of pictures.keys()) {
        if (pictures.size <= MOST_PICTURES) break;
        if (!rows.has(index)) pictures.delete(index);
      }
    }
    paint();
  }

  const repaint = keepPainted(list, () => {
    const rem = parseFloat(getComputedStyle(document.documentElement).fontSize);
    const height = Math.round(LINE * rem);
    // Other inks: each is painted anew.
    for (const { canvas } of rows.values()) canvas.width = 0;
    if (height !== line) {
      line = height;
      arrange();
    } else render();
  });
  list.addEventListener("scroll", render, { passive: true });
  /** Beside the answer the list reaches down to the end of the window, wherever the page is scrolled to. */
  const reach = () => frame.style.setProperty("--above", `${Math.max(0, Math.round(frame.getBoundingClientRect().top))}px`);
  addEventListener("scroll", reach, { passive: true });
  new ResizeObserver(reach).observe(need("sheet", HTMLElement));

  /* What is watched */

  session.watch(
    (state) => state.answer,
    (held) => {
      const hidden = held === null || held.count < 2;
      const fresh = frame.hidden && !hidden;
      for (const id of ["overview", "choice"]) need(id, HTMLElement).hidden = hidden;
      need("sheet", HTMLElement).toggleAttribute("data-several", !hidden);
      if (held === null || hidden) return;
      const other = held.inputs !== inputs;
      // Under other settings the pictures of before stay until there are new ones.
      if (other) pictures.clear();
      if (held.key !== key) refill();
      const anew = other || held.key !== key;
      if (held.verdicts !== verdicts) {
        verdicts = held.verdicts;
        offerVerdicts();
        refill();
      }
      ({ key, inputs } = held);
      if (anew && !chosen) {
        // Moments follow one another; components come in no order.
        const moments = held.preamble.understood.columns_are === "time-points";
        [order.value, grouping.value] = moments ? ["number", "none"] : ["rv", "band"];
        take();
      }
      const elsewhere = (!choosing || anew) && active !== held.chosen;
      if (elsewhere) active = held.chosen;
      number.hidden = held.count < LONG;
      number.max = String(held.maps.length);
      if (document.activeElement !== number) number.value = String(held.chosen + 1);
      if (anew) arrange(other);
      else arrangeSoon();
      if (fresh) {
        reach();
        repaint();
      }
      if (elsewhere) {
        bringIntoView(active);
        render();
      }
    },
  );
}

/** Gives an element these children, touching it only where they differ. @param {HTMLElement} holder @param {HTMLElement[]} wanted */
function keepChildren(holder, wanted) {
  if (holder.childElementCount === wanted.length && wanted.every((child, at) => holder.children[at] === child)) return;
  holder.replaceChildren(...wanted);
}
