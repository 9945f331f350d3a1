/** How far to trust the fit of the chosen map: its verdict above the maps, reasons and region below them. */

import { surroundingsOf } from "../draw/canvas.js";
import { SvgPen, svgElement } from "../draw/pen.js";
import { legendMarks, paintRegion, verdictMark } from "../draw/region.js";
import { typeset } from "../text/figures.js";
import { explainedOf, verdictOf } from "../session/explanations.js";
import { drawnText, verdictParts } from "../text/trust.js";
import { word } from "../text/words.js";
import { make, need } from "./element.js";
import { marksOf } from "./plates.js";
import { writeRows } from "./rows.js";
import { dropOrphanedNote, withTerms } from "./terms.js";

/** @import { Session } from "../session/session.js" */
/** @import { RegionMarks } from "../draw/region.js" */
/** @import { MarkKind } from "./plates.js" */

/** The time left is told from here on, when it says something. */
const TOLD_MS = 700;

/** What is drawn into the views of the map in view besides the best fit. @param {SessionState} state @returns {RegionMarks} */
export function regionMarks(state) {
  const region = state.answer?.trust?.region;
  const { alternatives, hand } = explainedOf(state);
  return marksOf({ region, alternatives, hand }, isMarkShown);
}

/** By the boxes of the legend. @param {MarkKind} kind */
export function isMarkShown(kind) {
  return need(`region-${kind}`, HTMLInputElement).checked;
}

/** @param {string} id @param {{ text: string }[]} lines */
export function writeLines(id, lines) {
  const list = need(id, HTMLElement);
  list.replaceChildren(...lines.map(({ text }) => {
    const line = make("li", "");
    line.append(...withTerms(typeset(text)));
    return line;
  }));
  list.hidden = lines.length === 0;
}

/** @param {Trust["region"]["causes"]} causes */
function writeCauses(causes) {
  const most = Math.max(...causes.map(({ sd }) => Number(sd) || 0), 1e-9);
  need("cause-table", HTMLTableElement).tBodies[0].replaceChildren(...causes.map(({ cause, label, size, sd }) => {
    const row = make("tr", "", { "data-cause": cause });
    const bar = make("span", "", { class: "cause-bar", "aria-hidden": "true" });
    bar.style.setProperty("--share", String((Number(sd) || 0) / most));
    const value = make("td", typeset(sd));
    value.append(bar);
    row.append(make("th", typeset(label), { scope: "row" }), make("td", typeset(size)), value);
    return row;
  }));
}

/** @param {Trust} trust */
function writeTrust({ region, cautions }) {
  writeLines("trust-cautions", cautions.map((text) => ({ text })));
  const { repeats } = region;
  need("repeats", HTMLElement).hidden = repeats === null;
  need("repeats-sentence", HTMLElement).textContent = typeset(repeats?.sentence ?? "");
  writeRows(need("repeats-rows", HTMLTableElement).tBodies[0], repeats?.rows ?? []);
  need("region-sentence", HTMLElement).replaceChildren(...withTerms(typeset(region.sentence)));
  writeRows(need("region-rows", HTMLTableElement).tBodies[0], region.rows);
  writeCauses(region.causes);
  need("region-structure", HTMLElement).replaceChildren(...withTerms(typeset(region.structure)));
  writeLines("region-notes", region.notes.map((text) => ({ text })));
  dropOrphanedNote();
}

/** @param {Session} session */
export function showTrust(session) {
  /** @param {Trust["verdict"]} verdict */
  function writeReasons(verdict) {
    writeLines("verdict-reasons", verdict?.reasons ?? []);
    writeLines("verdict-hints", verdict?.hints ?? []);
    need("hints-title", HTMLElement).hidden = !verdict?.hints.length;
    need("reasons-title", HTMLElement).hidden = verdict === null;
  }
  const said = need("verdict-said", HTMLElement);
  const progress = need("drawn-progress", HTMLProgressElement);
  const [stop, go] = ["draw-stop", "draw-go"].map((id) => need(id, HTMLButtonElement));
  let begun = { at: 0, done: 0, key: "" };

  stop.addEventListener("click", () => {
    session.stopPopulations();
    go.focus();
  });
  go.addEventListener("click", () => {
    session.drawPopulations();
    stop.focus();
  });

  /** @param {Populations} populations */
  function leftOf({ key, done, total, state }) {
    if (state !== "drawing") begun.key = "";
    else if (begun.key !== key) begun = { at: performance.now(), done, key };
    const spent = performance.now() - begun.at;
    const fresh = state !== "drawing" || spent < TOLD_MS || done === begun.done;
    return fresh ? null : ((spent / (done - begun.done)) * (total - done)) / 1000;
  }

  /** @param {Trust["verdict"]} verdict @param {Populations["state"] | undefined} state */
  function writeVerdict(verdict, state) {
    if (verdict) {
      const [title, rest] = verdictParts(verdict);
      const part = state === "done" ? [] : [make("span", ` ${word("verdict.part")}`, { class: "small" })];
      said.replaceChildren(verdictMark(verdict.word), make("strong", title), ...withTerms(typeset(rest)), ...part);
    } else if (state === "done") {
      // It comes in a moment; its room stays, so that nothing moves.
      return;
    } else {
      said.textContent = word(state === "stopped" ? "verdict.stopped" : "verdict.waiting");
    }
    said.dataset.verdict = verdict?.word ?? "";
  }

  function showState() {
    const { answer, populations } = session.read();
    const state = populations?.state;
    const verdict = verdictOf(session.read());
    need("verdict", HTMLElement).hidden = !answer?.sheet;
    said.classList.toggle("waits", !verdict && state === "done");
    writeVerdict(verdict, state);
    need("verdict-why", HTMLElement).hidden = !answer?.trust;
    const busy = state === "drawing" || state === "stopped";
    need("drawing-line", HTMLElement).hidden = !busy;
    stop.hidden = state !== "drawing";
    go.hidden = state !== "stopped";
    if (populations === null || !busy) return;
    progress.value = populations.done / Math.max(1, populations.total);
    need("drawn", HTMLElement).textContent = drawnText(populations, leftOf(populations));
  }

  session.watch(({ populations }) => populations, showState);
  session.watch(({ answer }) => answer?.sheet, showState);
  session.watch(verdictOf, (verdict) => {
    showState();
    if (verdict !== null || session.read().answer?.trust) writeReasons(verdict);
  });
  session.watch(
    ({ answer }) => answer?.trust,
    (trust) => {
      showState();
      need("trust", HTMLElement).hidden = !session.read().answer?.sheet;
      // Until those of the next map are there, the room of what was shown stays.
      need("trust-body", HTMLElement).classList.toggle("waits", !trust);
      if (trust) writeTrust(trust);
    },
  );

  const legend = need("region-legend", HTMLElement);
  function writeLegend() {
    const state = session.read();
    const region = state.answer?.trust?.region;
    const { alternatives, hand } = explainedOf(state);
    const known = (alternatives?.kinds ?? []).filter(({ dipoles }) => dipoles.length > 0).map(({ kind }) => String(kind));
    const there = [
      ...(region ? ["cloud", "errors"] : []),
      ...(region?.noise_only ? ["noise"] : []),
      ...(region?.repeats ? ["repeats"] : []),
      ...known,
      ...(hand === null ? [] : ["hand"]),
    ];
    legend.hidden = there.length === 0;
    const around = surroundingsOf(legend, false);
    for (const place of /** @type {NodeListOf<HTMLElement>} */ (legend.querySelectorAll("[data-marks]"))) {
      const kind = /** @type {Parameters<typeof legendMarks>[0]} */ (place.dataset.marks);
      place.hidden = !there.includes(kind);
      const picture = svgElement("svg", { width: 26, height: 10, "aria-hidden": "true", class: "swatch" });
      paintRegion(/** @type {any} */ (new SvgPen(picture)), ([x, y]) => ({ x, y }), legendMarks(kind), around);
      place.querySelector("svg")?.remove();
      place.querySelector("span")?.before(picture);
    }
  }
  session.watch(({ answer }) => answer?.trust, writeLegend);
  session.watch((state) => explainedOf(state).alternatives, writeLegend);
  session.watch((state) => explainedOf(state).hand === null, writeLegend);
  matchMedia("(prefers-color-scheme: dark)").addEventListener("change", writeLegend);
}
