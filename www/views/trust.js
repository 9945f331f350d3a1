/** How far to trust the fit of the chosen map: its verdict above the maps, reasons and region below them. */

import { surroundingsOf } from "../draw/canvas.js";
import { SvgPen, svgElement } from "../draw/pen.js";
import { legendMarks, paintRegion, verdictMark } from "../draw/region.js";
import { typeset } from "../text/figures.js";
import { drawnText, verdictParts } from "../text/trust.js";
import { word } from "../text/words.js";
import { make, need } from "./element.js";
import { writeRows } from "./rows.js";
import { dropOrphanedNote, withTerms } from "./terms.js";

/** @import { Session } from "../session/session.js" */
/** @import { RegionMarks } from "../draw/region.js" */

/** The time left is told from here on, when it says something. */
const TOLD_MS = 700;

/** What of the region is drawn into the views, by the boxes of its legend. @param {Trust | null | undefined} trust @returns {RegionMarks | null} */
export function regionMarks(trust) {
  if (!trust) return null;
  /** @template T @param {keyof RegionMarks} kind @param {T} marks @param {T} none @returns {T} */
  const shown = (kind, marks, none) => (need(`region-${kind}`, HTMLInputElement).checked ? marks : none);
  const { cloud, ellipsoid, noise_only: noise, repeats } = trust.region;
  return {
    cloud: shown("cloud", cloud, []),
    errors: shown("errors", ellipsoid, null),
    noise: shown("noise", noise, null),
    repeats: shown("repeats", repeats?.points ?? [], []),
  };
}

/** @param {string} id @param {{ text: string }[]} lines */
function writeLines(id, lines) {
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
function writeTrust({ verdict, region, cautions }) {
  writeLines("verdict-reasons", verdict?.reasons ?? []);
  writeLines("verdict-hints", verdict?.hints ?? []);
  need("hints-title", HTMLElement).hidden = !verdict?.hints.length;
  need("reasons-title", HTMLElement).hidden = verdict === null;
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

  /** @param {Trust["verdict"] | undefined} verdict @param {Populations["state"] | undefined} state */
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
    need("verdict", HTMLElement).hidden = !answer?.sheet;
    said.classList.toggle("waits", !answer?.trust?.verdict && state === "done");
    writeVerdict(answer?.trust?.verdict, state);
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
    const region = session.read().answer?.trust?.region;
    legend.hidden = !region;
    if (!region) return;
    const around = surroundingsOf(legend, false);
    for (const place of legend.querySelectorAll("label")) {
      const kind = /** @type {keyof RegionMarks} */ (place.dataset.marks);
      place.hidden = kind === "noise" ? region.noise_only === null : kind === "repeats" && region.repeats === null;
      const picture = svgElement("svg", { width: 26, height: 10, "aria-hidden": "true", class: "swatch" });
      paintRegion(/** @type {any} */ (new SvgPen(picture)), ([x, y]) => ({ x, y }), legendMarks(kind), around);
      place.querySelector("svg")?.remove();
      place.querySelector("span")?.before(picture);
    }
  }
  session.watch(({ answer }) => answer?.trust, writeLegend);
  matchMedia("(prefers-color-scheme: dark)").addEventListener("change", writeLegend);
}
