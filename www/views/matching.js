/** Maps of two decompositions paired one to one by the correlation of their scalp maps; a pair opens in place. */

import { freshMaps } from "../session/decompositions.js";
import { outwardNames } from "../session/outward.js";
import { paintMapDisc } from "../draw/disc.js";
import { copyText } from "../export/out.js";
import { cellsText } from "../export/table.js";
import { percentText, shortName, typeset } from "../text/figures.js";
import { mapWords, matchedText, unmatchedText, word } from "../text/words.js";
import { confirmOn } from "./confirm.js";
import { make, need } from "./element.js";
import { figureTools } from "./figure.js";
import { mapRowFigure, rasterAlt } from "./plates.js";
import { fittedDecompositions, inOne } from "./several.js";
import { paintOn } from "./surface.js";

/** @import { Session } from "../session/session.js" */
/** @import { MapContent } from "../draw/disc.js" */

/** Pixels across the raster of a map that is looked at. */
const PAIR_RASTER = 64;

/** @typedef {"pair" | "r" | "distance" | "rv_a" | "rv_b"} MatchOrder */

/** @type {MatchOrder[]} */
const MATCH_ORDERS = ["pair", "r", "distance", "rv_a", "rv_b"];

/** @param {Session} session */
export function showMatching(session) {
  const section = need("matching", HTMLDetailsElement);
  const lists = { a: need("match-a", HTMLSelectElement), b: need("match-b", HTMLSelectElement) };
  const status = need("match-status", HTMLElement);
  const table = need("match-table", HTMLTableElement);
  const copy = need("copy-matches", HTMLButtonElement);
  /** @type {Matches | null} */
  let found = null;
  /** What it was found for. */
  let asked = "";
  /** @type {MatchOrder} */
  let order = "r";

  /** @param {"a" | "b"} side */
  const chosen = (side) => session.read().decompositions.find(({ id }) => String(id) === lists[side].value);

  /** Each pair with both rows. */
  function pairs() {
    const [a, b] = [freshMaps(chosen("a")?.answer), freshMaps(chosen("b")?.answer)];
    /** @param {MapRow | UnfittedMap} row */
    const rv = (row) => (row !== undefined && "rv" in row ? row.rv : Infinity);
    const all = (found?.matches ?? []).map((match) => {
      const [mapA, mapB] = [a[match.index_a], b[match.index_b]];
      return { ...match, mapA, mapB, rv_a: rv(mapA), rv_b: rv(mapB) };
    });
    /** @type {Record<MatchOrder, (pair: (typeof all)[number]) => number>} */
    const keys = {
      pair: (pair) => pair.index_a,
      r: (pair) => -Math.abs(pair.correlation),
      distance: (pair) => pair.distance_mm ?? Infinity,
      rv_a: (pair) => pair.rv_a,
      rv_b: (pair) => pair.rv_b,
    };
    return all.sort((one, other) => keys[order](one) - keys[order](other) || one.index_a - other.index_a);
  }

  /** @param {number} rv */
  const rvText = (rv) => (Number.isFinite(rv) ? percentText(rv).replace(/\s%$/, "") : word("match.unfitted"));

  /** @param {ReturnType<typeof pairs>[number]} pair */
  const cellsOf = (pair) => [...pair.cells.slice(2), rvText(pair.rv_a), rvText(pair.rv_b)];

  function write() {
    const body = table.tBodies[0];
    const rows = pairs();
    table.hidden = rows.length === 0;
    copy.hidden = rows.length === 0;
    for (const heading of table.querySelectorAll("th[data-order]")) {
      if (heading.getAttribute("data-order") === order) heading.setAttribute("aria-sort", order === "r" ? "descending" : "ascending");
      else heading.removeAttribute("aria-sort");
    }
    body.replaceChildren(
      ...rows.map((pair) => {
        const row = make("tr", "");
        const name = `${shortName(pair.mapA?.name ?? "")} \u2013 ${shortName(pair.mapB?.name ?? "")}`;
        const heading = make("th", "", { scope: "row" });
        const button = make("button", name, { type: "button", class: "quiet", "aria-expanded": "false" });
        heading.append(button);
        row.append(heading, ...cellsOf(pair).map((cell) => make("td", typeset(cell))));
        row.addEventListener("click", () => unfold(row, button, pair));
        return row;
      }),
    );
    need("match-unpaired", HTMLElement).replaceChildren(
      ...(found === null ? [] : unmatchedText(found, chosen("a"), chosen("b"))).map((text) => make("li", text)),
    );
  }

  /** @param {HTMLElement} row @param {HTMLElement} button @param {ReturnType<typeof pairs>[number]} pair */
  async function unfold(row, button, pair) {
    const open = button.getAttribute("aria-expanded") === "true";
    button.setAttribute("aria-expanded", String(!open));
    if (open) return row.nextElementSibling?.remove();
    const below = make("tr", "", { class: "match-pair" });
    const cell = make("td", "", { colspan: "6" });
    below.append(cell);
    row.after(below);
    const sides = [
      { side: /** @type {const} */ ("a"), index: pair.index_a, row: pair.mapA, sign: 1 },
      { side: /** @type {const} */ ("b"), index: pair.index_b, row: pair.mapB, sign: Math.sign(pair.correlation) || 1 },
    ];
    /** @type {{ id: number, name: string, map: MapContent }[]} */
    const drawn = [];
    for (const { side, index, row: map, sign } of sides) {
      const decomposition = chosen(side);
      if (decomposition === undefined) continue;
      const figure = make("figure", "");
      const caption = make("figcaption", `${shortName(map?.name ?? "")} · ${shortName(decomposition.name)}`);
      if (sign < 0) caption.append(make("span", ` · ${word("match.turned")}`, { class: "small" }));
      const canvas = /** @type {HTMLCanvasElement} */ (make("canvas", "", { class: "disc", role: "img", "aria-label": caption.textContent ?? "" }));
      const show = make("button", word("match.open"), { type: "button" });
      show.addEventListener("click", async () => {
        await session.openDecomposition(decomposition.id);
        await session.choose(index);
        need("sentence", HTMLElement).focus();
      });
      figure.append(caption, canvas, show);
      cell.append(figure);
      const maps = await session.thumbnails(decomposition.id, [index], PAIR_RASTER);
      if (maps === null) continue;
      const content = { ...maps, raster: maps.measured[0], sign, words: mapWords() };
      drawn.push({ id: decomposition.id, name: shortName(map?.name ?? ""), map: content });
      canvas.setAttribute("aria-label", rasterAlt(caption.textContent ?? "", content));
      const paint = () => paintOn(canvas, false, (surface, around) => paintMapDisc(surface, content, around));
      new ResizeObserver(paint).observe(canvas);
      matchMedia("(prefers-color-scheme: dark)").addEventListener("change", paint);
    }
    figureTools(session, cell, () => {
      const labels = outwardNames(session.read()).decompositions;
      return mapRowFigure("inward-pair", word("match"), drawn.map(({ id, name, map }) => ({ heading: `${name} · ${shortName(labels.get(id)?.name ?? "")}`, map })));
    });
  }

  /** Whether all maps are fitted. @param {Decomposition | undefined} one */
  const isWhole = (one) => one?.answer != null && one.answer.fitted === one.answer.count;

  /** Which answers both lists stand for now. */
  const stamp = () => ["a", "b"].map((side) => {
    const one = chosen(/** @type {"a" | "b"} */ (side));
    return `${one?.id} ${one?.answer?.key} ${isWhole(one) ? "" : session.read().stopped}`;
  }).join(" ");

  async function ask() {
    const [a, b] = [chosen("a"), chosen("b")];
    if (!section.open || section.hidden || a === undefined || b === undefined || stamp() === asked) return;
    // What is still coming in is waited for, unless it was given up.
    if (![a, b].every(isWhole) && !session.read().stopped) return;
    asked = stamp();
    const mine = asked;
    if (a === b) {
      found = null;
      status.textContent = word("match.same");
      return write();
    }
    status.textContent = word("match.busy");
    try {
      const matches = await session.matches(a.id, b.id);
      if (mine !== asked) return;
      found = matches;
      status.textContent = matches === null ? "" : matchedText(matches);
    } catch (fault) {
      if (mine !== asked) return;
      found = null;
      const { message, hint } = /** @type {Fault} */ (fault);
      status.textContent = typeset([message, hint].join(" "));
    }
    write();
  }

  section.addEventListener("toggle", offer);
  for (const list of Object.values(lists)) list.addEventListener("change", ask);
  for (const name of MATCH_ORDERS) {
    table.querySelector(`th[data-order="${name}"] button`)?.addEventListener("click", () => {
      order = name;
      write();
    });
  }
  copy.addEventListener("click", async () => {
    const heading = [word("match.first"), word("match.second"), word("match.r"), word("match.sign"), word("match.distance"), word("match.rv-a"), word("match.rv-b")];
    const rows = pairs().map((pair) => [pair.mapA?.name ?? "", pair.mapB?.name ?? "", ...cellsOf(pair)]);
    confirmOn(copy, await copyText(cellsText([heading, ...rows])));
  });

  /** Offers the decompositions that there are. */
  function offer() {
    const fitted = fittedDecompositions(session.read());
    section.hidden = fitted.length < 2;
    if (section.hidden || !section.open) return;
    const names = fitted.map(({ decomposition: { id, name, subject } }) => ({ id: String(id), text: [name, subject].filter((part) => part).map(shortName).join(" · ") }));
    for (const [at, list] of Object.values(lists).entries()) {
      const held = list.value;
      list.replaceChildren(...names.map(({ id, text }) => make("option", text, { value: id })));
      list.value = names.some(({ id }) => id === held) ? held : names[at].id;
    }
    ask();
  }

  session.watch((state) => state.decompositions, inOne(offer));
}
