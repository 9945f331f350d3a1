/**
 * All numbers of all maps, a row each: folded until wanted, sorted by its heads, to be copied as it stands or
 * downloaded in full precision.
 */

import { freshMaps } from "../session/decompositions.js";
import { copyText, saveBlob } from "../export/out.js";
import { guarded, isFormula, rowsJson, rowsText } from "../export/rows.js";
import { typeset } from "../text/figures.js";
import { columnHead, guardText, mapText, moreRowsText, word } from "../text/words.js";
import { confirmOn } from "./confirm.js";
import { make, need } from "./element.js";
import { VERDICTS } from "./ledger.js";

/** @import { NumberedMap } from "../export/rows.js" */
/** @import { Session } from "../session/session.js" */

/** Rows at first, and rows that each further wish adds: browsers stall over many thousand. */
const FIRST = 100;
const FURTHER = 500;

const BY_NAME = new Intl.Collator("en", { numeric: true });

/** By what a column is sorted. @type {Record<string, (row: MapRow) => string | number | boolean | null>} */
const COLUMN_KEYS = {
  name: (row) => row.name,
  rv: (row) => row.rv,
  adjusted_rv: (row) => row.adjusted_rv,
  x: (row) => row.canonical_mm[0],
  y: (row) => row.canonical_mm[1],
  z: (row) => row.canonical_mm[2],
  site: (row) => row.nearest_site,
  side: (row) => row.side,
  region: (row) => row.region,
  depth: (row) => row.depth_mm,
  eccentricity: (row) => row.eccentricity,
  strength: (row) => row.strength,
  radial: (row) => row.radial_share,
  boundary: (row) => row.at_boundary,
  variance: (row) => row.variance,
};

/** What is in words is not set like a number. */
const IN_WORDS = ["name", "site", "side", "region", "boundary", "verdict"];

/** What is missing comes last, whichever way. @param {unknown} a @param {unknown} b @param {number} way */
function compareKeys(a, b, way) {
  if (a === null || b === null) return Number(a === null) - Number(b === null);
  return way * (typeof a === "string" ? BY_NAME.compare(a, String(b)) : Number(a) - Number(b));
}

/** @param {Session} session */
export function showTable(session) {
  const panel = need("table-panel", HTMLDetailsElement);
  const table = need("all-numbers", HTMLTableElement);
  const more = need("table-more", HTMLButtonElement);
  const guard = need("table-guard", HTMLElement);
  const copy = need("table-copy", HTMLButtonElement);
  let sort = { code: "number", way: 1 };
  let most = FIRST;
  let timer = 0;
  let took = 0;

  const answer = () => session.read().answer;

  /** Those of the engine, and the verdict where there are any. */
  function columnsNow() {
    const { columns, answer: held } = session.read();
    return held?.verdicts == null ? columns : [...columns, { code: "verdict", label: word("verdict"), unit: "", meaning: "" }];
  }
  /** @param {number} index */
  const verdictOf = (index) => answer()?.verdicts?.[index] ?? null;
  /** @param {number} index */
  function verdictCell(index) {
    const verdict = verdictOf(index);
    return verdict === null ? "" : word(`verdict.${verdict}`);
  }

  /** @param {Answer["maps"]} maps */
  function sorted(maps) {
    const order = [...maps.keys()];
    if (sort.code === "number") return sort.way < 0 ? order.reverse() : order;
    const keys = new Map(
      order.map((at) => {
        const map = maps[at];
        if (sort.code === "name") return [at, map.name];
        const verdict = verdictOf(at);
        if (sort.code === "verdict") return [at, verdict && VERDICTS.indexOf(verdict)];
        return [at, "error" in map ? null : COLUMN_KEYS[sort.code](map)];
      }),
    );
    return order.sort((a, b) => compareKeys(keys.get(a), keys.get(b), sort.way) || a - b);
  }

  /** @param {SessionState["columns"]} columns */
  function writeHead(columns) {
    const heads = [{ code: "number", label: word("table.number"), unit: "", meaning: "" }, ...columns];
    const row = table.tHead?.rows[0];
    row?.replaceChildren(
      ...heads.map((column) => {
        const head = make("th", "", { scope: "col", "data-code": column.code });
        if (!IN_WORDS.includes(column.code)) head.className = "figure";
        const button = make("button", columnHead(column), { type: "button", class: "sort", title: column.meaning });
        button.addEventListener("click", () => {
          sort = { code: column.code, way: sort.code === column.code ? -sort.way : 1 };
          show();
        });
        head.append(button);
        return head;
      }),
    );
  }

  /** @param {Answer} held @param {number} index @param {SessionState["columns"]} columns */
  function rowOf(held, index, columns) {
    const map = held.maps[index];
    const row = document.createElement("tr");
    row.dataset.index = String(index);
    const head = make("th", "", { scope: "row" });
    head.append(make("button", mapText(held, index), { type: "button", class: "quiet" }));
    row.append(make("td", String(index + 1), { class: "figure" }), head);
    if ("error" in map) {
      row.append(make("td", typeset(map.error.message), { class: "warm", colspan: String(columns.length - 1) }));
      return row;
    }
    columns.forEach(({ code }, at) => {
      if (code === "name") return;
      const cell = make("td", code === "verdict" ? verdictCell(index) : typeset(map.cells[at]));
      if (!IN_WORDS.includes(code)) cell.className = "figure";
      row.append(cell);
    });
    return row;
  }

  function show() {
    const held = answer();
    const columns = columnsNow();
    if (held === null || !panel.open) return;
    const start = performance.now();
    if (table.tHead?.rows[0].childElementCount !== columns.length + 1) writeHead(columns);
    for (const head of table.querySelectorAll("th[data-code]")) {
      const way = sort.way > 0 ? "ascending" : "descending";
      head.setAttribute("aria-sort", head.getAttribute("data-code") === sort.code ? way : "none");
    }
    const order = sorted(freshMaps(held));
    const focused = document.activeElement?.closest("#all-numbers tbody tr");
    const kept = focused instanceof HTMLElement ? focused.dataset.index : undefined;
    table.tBodies[0].replaceChildren(...order.slice(0, most).map((index) => rowOf(held, index, columns)));
    markChosen();
    const focus = table.querySelector(`tbody tr[data-index="${kept}"] button`);
    if (focus instanceof HTMLElement) focus.focus({ preventScroll: true });
    const left = order.length - most;
    more.hidden = left <= 0;
    more.textContent = moreRowsText(Math.min(left, FURTHER), left);
    const formulas = order.filter((at) => isFormula(held.maps[at].name)).length;
    guard.hidden = formulas === 0;
    guard.textContent = guardText(formulas);
    took = performance.now() - start;
  }

  function markChosen() {
    const chosen = String(answer()?.chosen);
    for (const row of table.tBodies[0].rows) row.toggleAttribute("data-now", row.dataset.index === chosen);
  }

  panel.addEventListener("toggle", show);
  more.addEventListener("click", () => {
    const before = table.tBodies[0].rows.length;
    most += FURTHER;
    show();
    table.tBodies[0].rows[before]?.querySelector("button")?.focus();
  });
  table.tBodies[0].addEventListener("click", (event) => {
    const row = event.target instanceof Element ? event.target.closest("button")?.closest("tr") : null;
    if (row) session.choose(Number(row.dataset.index));
  });
  copy.addEventListener("click", async () => {
    const held = answer();
    const columns = columnsNow();
    if (held === null) return;
    const lines = sorted(freshMaps(held)).map((index) => {
      const map = held.maps[index];
      const cells = "error" in map ? [guarded(map.name), map.error.message] : [guarded(map.name), ...map.cells.slice(1), verdictCell(index)];
      return [String(index + 1), ...cells];
    });
    const heading = [word("table.number"), ...columns.map(columnHead)];
    const text = [heading, ...lines].map((cells) => cells.map((cell) => cell.replace(/[\t\r\n]/g, " ")).join("\t"));
    confirmOn(copy, await copyText(text.join("\n")));
  });
  /** @type {[string, string, (maps: NumberedMap[], unit: MapUnit) => string][]} */
  const files = [
    ["csv", "text/csv", (maps, unit) => rowsText(maps, unit, ",")],
    ["tsv", "text/tab-separated-values", (maps, unit) => rowsText(maps, unit, "\t")],
    ["json", "application/json", (maps, unit) => rowsJson(maps, unit, session.read().program)],
  ];
  for (const [kind, type, write] of files) {
    need(`table-${kind}`, HTMLButtonElement).addEventListener("click", () => {
      const held = answer();
      if (held === null) return;
      const maps = freshMaps(held).map((map, at) => ({ number: at + 1, map, verdict: verdictOf(at) }));
      saveBlob(new Blob([write(maps, held.settings.mapUnit)], { type }), `inward-table.${kind}`);
    });
  }

  session.watch(
    (state) => state.answer,
    (held) => {
      panel.hidden = held === null || held.count < 2;
      if (timer !== 0 || panel.hidden) return;
      timer = setTimeout(() => {
        timer = 0;
        show();
      }, 5 * took);
    },
  );
  session.watch((state) => state.answer?.key, () => (most = FIRST));
  session.watch((state) => state.columns, () => table.tHead?.rows[0].replaceChildren());
  session.watch((state) => state.answer?.chosen, markChosen);
}
