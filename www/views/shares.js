/**
 * The near-dipolar share: how many maps of each decomposition have a residual variance of at most x, as curves with a
 * threshold to move and a table; and mutual-information reductions, where they are given, against it.
 */

import { outwardNames } from "../session/outward.js";
import { layOutShares, paintInformation, paintShares, shareAt, sharesHeight } from "../draw/curves.js";
import { surroundingsOf } from "../draw/canvas.js";
import { SvgPen, svgElement } from "../draw/pen.js";
import { seriesColour, seriesDash } from "../draw/series.js";
import { copyText, saveBlob } from "../export/out.js";
import { cellsText } from "../export/table.js";
import { enteredNumber, enteredText, percentText, typeset } from "../text/figures.js";
import { shareAtText, shareBelowText, shareTitle, word } from "../text/words.js";
import { confirmOn } from "./confirm.js";
import { make, need } from "./element.js";
import { figureTools, showFigure } from "./figure.js";
import { noteElement } from "./notes.js";
import { populationLines, withRule } from "./populations.js";
import { shareLines, shareTables } from "./share_tables.js";
import { fittedDecompositions, nounOf } from "./several.js";
import { keepPainted } from "./surface.js";

/** @import { Session } from "../session/session.js" */
/** @import { ShareLine, SharesContent } from "../draw/curves.js" */
/** @import { FigurePainter } from "./figure.js" */

/** Shares of common practice, and how far the arrow keys move the threshold. */
const COARSE = 0.01;
const FINE = 0.001;
const PAGE = 0.05;
const LEAST = 0.001;
/** CSS pixels across a figure that is saved. */
const SAVED = { shares: 720, information: 480 };

/** @param {Session} session */
export function showShares(session) {
  const section = need("shares", HTMLDetailsElement);
  const place = need("share-figure", HTMLElement);
  const handle = need("threshold-handle", HTMLElement);
  const field = need("threshold", HTMLInputElement);
  const most = need("share-most", HTMLSelectElement);
  const readout = need("share-readout", HTMLElement);
  const copy = need("copy-shares", HTMLButtonElement);
  const about = need("information-figure", HTMLElement);
  const behind = need("share-behind", HTMLInputElement);
  let logarithmic = true;
  /** Reference populations as they were last drawn. @type {{ of: Populations | null, lines: ShareLine[] }} */
  let simulated = { of: null, lines: [] };
  /** @type {Summary | null} */
  let summary = null;
  /** @type {(ShareLine & { information: number | null })[]} */
  let lines = [];
  /** @type {number | null} */
  let pointed = null;
  /** Whether the engine is asked, and whether what it is asked about has changed since. */
  let asking = false;
  let stale = false;
  /** Whether decompositions were of several subjects when the tables were last written. @type {boolean | null} */
  let grouped = null;
  let offered = false;

  function behindNow() {
    const { populations, answer } = session.read();
    if (!behind.checked || populations === null || populations.answer !== answer?.key) return [];
    if (simulated.of !== populations) simulated = { of: populations, lines: populationLines(populations) };
    return simulated.lines;
  }

  /** @returns {SharesContent} */
  const content = () => ({
    lines,
    behind: behindNow(),
    logarithmic,
    most: Number(most.value),
    threshold: session.read().threshold,
    pointed,
    words: { x: word("shares.x"), y: shareTitle(nounOf(session.read())) },
  });

  /** Lines under the names that leave the page. */
  const outwardLines = () => (summary === null ? [] : shareLines(summary, session.read(), outwardNames(session.read()).decompositions));

  /** Each line at a residual variance, in words. @param {number} rv */
  const valuesAt = (rv, which = lines) => which.map((line) => `${line.name} ${percentText(shareAt(line, rv))}`).join(", ");

  function placeHandle() {
    const { threshold } = session.read();
    const shown = content();
    const plot = layOutShares(place.clientWidth, sharesHeight(place.clientWidth, lines.length), shown, surroundingsOf(place, false));
    handle.hidden = threshold > shown.most;
    Object.assign(handle.style, {
      left: `${plot.x(threshold)}px`,
      top: `${plot.top - 6}px`,
      height: `${plot.bottom - plot.top + 12}px`,
    });
    handle.setAttribute("aria-valuemax", enteredText(100 * shown.most));
    handle.setAttribute("aria-valuenow", enteredText(100 * threshold));
    handle.setAttribute("aria-valuetext", `${percentText(threshold)}: ${valuesAt(threshold)}`);
  }

  const paint = keepPainted(section, (printing) => {
    if (lines.length === 0) return;
    const shown = content();
    showFigure(place, shareTitle(nounOf(session.read())), printing, (width, around, penAt) => {
      const height = sharesHeight(width, lines.length);
      paintShares({ pen: penAt(0, 0), width, height }, printing ? { ...shown, pointed: null } : shown, around);
      return height;
    });
    if (!printing) placeHandle();
    const points = informed();
    need("information", HTMLElement).hidden = points.length < 2;
    if (points.length < 2) return;
    showFigure(about, word("information"), printing, (width, around, penAt) => {
      const wide = Math.min(width, SAVED.information);
      paintInformation({ pen: penAt(0, 0), width: wide, height: 0.75 * wide }, informationContent(points), around);
      return 0.75 * wide;
    });
  });

  /** Decompositions, or the means of those of one name, whose mutual-information reduction is given. */
  function informed(which = lines) {
    const { threshold } = session.read();
    return which.flatMap((line) => {
      const { name, at, information } = line;
      return information === null ? [] : [{ name, at, information, share: shareAt(line, threshold) }];
    });
  }

  /** @param {ReturnType<typeof informed>} points */
  const informationContent = (points) => ({
    points,
    words: { x: `${shareBelowText(nounOf(session.read()), session.read().threshold)}, in %`, y: word("information.y") },
  });

  /** A piece of a line as it is drawn. @param {number} at */
  function swatch(at) {
    const { theme } = surroundingsOf(place, false);
    const picture = svgElement("svg", { width: 26, height: 10, "aria-hidden": "true", class: "swatch" });
    const pen = new SvgPen(picture);
    pen.strokeStyle = seriesColour(at, theme);
    pen.lineWidth = 2;
    pen.setLineDash(seriesDash(at));
    pen.moveTo(0, 5);
    pen.lineTo(26, 5);
    pen.stroke();
    return picture;
  }

  function writeTables() {
    if (summary === null) return;
    const several = summary.groups.length > 0;
    for (const { id, heading, rows, at } of shareTables(summary, session.read())) {
      const table = need(id, HTMLTableElement);
      table.tHead?.rows[0].replaceChildren(...heading.map((text) => make("th", typeset(text), { scope: "col" })));
      table.tBodies[0].replaceChildren(
        ...rows.map(([name, ...cells], k) => {
          const row = make("tr", "");
          const first = make("th", "", { scope: "row" });
          const line = at[k];
          if (line !== undefined) first.append(swatch(line));
          first.append(name);
          row.append(first, ...cells.map((cell) => make("td", typeset(cell))));
          return row;
        }),
      );
    }
    need("share-groups", HTMLElement).hidden = !several;
    need("share-differences", HTMLElement).hidden = summary.differences.length === 0;
    if (several !== grouped) need("share-members", HTMLDetailsElement).open = !several;
    grouped = several;
    need("share-notes", HTMLElement).replaceChildren(...summary.notes.map((note) => noteElement(note, new Set())));
  }

  /** Asks the engine; what has changed meanwhile is asked about once more. */
  async function ask() {
    if (section.hidden || !section.open) return;
    if (asking) {
      stale = true;
      return;
    }
    asking = true;
    do {
      stale = false;
      const { threshold } = session.read();
      const start = performance.now();
      try {
        summary = await session.summary([threshold]);
      } catch (fault) {
        // A later change asks again.
        summary = null;
        if (!stale) session.fail(fault);
      }
      // While maps come in, fitting them has the greater part of the time.
      const took = performance.now() - start;
      if (stale && session.read().progress !== null) await new Promise((wake) => setTimeout(wake, 10 * took));
    } while (stale);
    asking = false;
    lines = summary === null ? [] : shareLines(summary, session.read());
    writeTables();
    paint();
  }

  /** @param {number} rv */
  function move(rv) {
    if (Number.isFinite(rv)) session.setThreshold(Math.min(1, Math.max(LEAST, rv)));
  }

  /** @param {PointerEvent} event */
  function under(event) {
    const plot = layOutShares(place.clientWidth, sharesHeight(place.clientWidth, lines.length), content(), surroundingsOf(place, false));
    return plot.rv(event.clientX - place.getBoundingClientRect().left);
  }
  /** Dragged, it keeps to tenths of a percent. @param {number} rv */
  const even = (rv) => Math.round(rv / FINE) * FINE;

  handle.addEventListener("keydown", (event) => {
    const { threshold } = session.read();
    const step = event.shiftKey ? FINE : COARSE;
    /** @type {Record<string, number>} */
    const moves = {
      ArrowRight: even(threshold + step),
      ArrowUp: even(threshold + step),
      ArrowLeft: even(threshold - step),
      ArrowDown: even(threshold - step),
      PageUp: even(threshold + PAGE),
      PageDown: even(threshold - PAGE),
      Home: COARSE,
      End: Number(most.value),
    };
    if (moves[event.key] === undefined || event.ctrlKey || event.metaKey || event.altKey) return;
    event.preventDefault();
    move(Math.min(moves[event.key], Number(most.value)));
  });
  let dragging = false;
  place.addEventListener("pointerdown", (event) => {
    if (!event.isPrimary || event.button !== 0) return;
    // A finger scrolls the page, unless it takes the handle.
    if (event.pointerType === "touch" && event.target !== handle) return;
    dragging = true;
    place.setPointerCapture(event.pointerId);
    move(even(under(event)));
    handle.focus({ preventScroll: true });
    event.preventDefault();
  });
  place.addEventListener("lostpointercapture", () => {
    dragging = false;
  });
  place.addEventListener("pointermove", (event) => {
    if (dragging) return move(even(under(event)));
    if (event.pointerType === "touch") return;
    point(under(event));
  });
  place.addEventListener("pointerleave", () => point(null));

  /** @param {number | null} rv */
  function point(rv) {
    pointed = rv;
    readout.textContent = rv === null ? word("shares.use") : `${shareAtText(rv)}: ${valuesAt(rv)}`;
    paint();
  }
  // Where it is stands before the first curves do.
  handle.setAttribute("aria-valuenow", enteredText(100 * session.read().threshold));
  point(null);

  field.addEventListener("change", () => {
    const entered = enteredNumber(field.value.replace("%", "")) / 100;
    const good = entered >= LEAST && entered <= 1;
    field.setAttribute("aria-invalid", String(!good));
    need("threshold-fault", HTMLElement).textContent = good ? "" : word("shares.invalid");
    if (good) move(entered);
  });
  const usual = need("usual-thresholds", HTMLElement);
  usual.addEventListener("change", (event) => {
    if (event.target instanceof HTMLInputElement) move(Number(event.target.value));
  });
  need("share-scale", HTMLElement).addEventListener("change", (event) => {
    if (event.target instanceof HTMLInputElement) logarithmic = event.target.value === "log";
    paint();
  });
  most.addEventListener("change", paint);
  function showBehind() {
    need("share-rule", HTMLElement).hidden = !behind.checked || behindNow().length === 0;
    if (behind.checked) paint();
  }
  behind.addEventListener("change", () => {
    showBehind();
    paint();
  });
  session.watch(
    ({ populations }) => populations,
    (populations) => {
      need("share-behind-choice", HTMLElement).hidden = populations === null;
      showBehind();
    },
  );
  need("comparison-json", HTMLButtonElement).addEventListener("click", async () => {
    const report = await session.comparison();
    if (report !== null) saveBlob(report, "inward-comparison.json");
  });
  copy.addEventListener("click", async () => {
    if (summary === null) return;
    const shown = shareTables(summary, session.read()).filter(({ rows }) => rows.length > 0);
    const texts = shown.map(({ heading, rows }) => cellsText([heading, ...rows]));
    confirmOn(copy, await copyText(texts.join("\n\n")));
  });

  section.addEventListener("toggle", ask);

  /** @type {FigurePainter} */
  const paintSaved = (width, around, penAt) => {
    const height = sharesHeight(width, lines.length);
    paintShares({ pen: penAt(0, 0), width, height }, { ...content(), lines: outwardLines(), pointed: null }, around);
    return height;
  };
  const title = () => shareTitle(nounOf(session.read()));
  figureTools(session, need("share-tools", HTMLElement), () => {
    const simulatedToo = behindNow().length > 0;
    const rule = session.read().answer?.trust?.rule;
    // Populations go nowhere without the rule of their sources.
    if (simulatedToo && rule === undefined) return null;
    return {
      name: "inward-near-dipolar-share",
      title: title(),
      description: `${shareAtText(session.read().threshold)}: ${valuesAt(session.read().threshold, outwardLines())}.`,
      width: SAVED.shares,
      paint: simulatedToo && rule !== undefined ? withRule(rule, paintSaved) : paintSaved,
    };
  }, place);
  figureTools(session, need("information-tools", HTMLElement), () => ({
    name: "inward-information",
    title: word("information"),
    description: informed(outwardLines()).map(({ name, share, information }) => `${name}: ${percentText(share)}, ${enteredText(information)}`).join("; "),
    width: SAVED.information,
    paint: (width, around, penAt) => {
      paintInformation({ pen: penAt(0, 0), width, height: 0.75 * width }, informationContent(informed(outwardLines())), around);
      return 0.75 * width;
    },
  }));

  session.watch(
    (state) => state.threshold,
    (threshold) => {
      if (document.activeElement !== field) field.value = enteredText(100 * threshold);
      field.setAttribute("aria-invalid", "false");
      need("threshold-fault", HTMLElement).textContent = "";
      for (const input of usual.querySelectorAll("input")) input.checked = Math.abs(Number(input.value) - threshold) < 1e-9;
      ask();
      paint();
    },
  );
  session.watch(
    // Whatever the shares hang on; another map in view does not count.
    ({ decompositions }) =>
      decompositions
        .map(({ id, name, subject, information, answer }) => [id, name, subject, information, answer?.key, answer?.fitted].join("\t"))
        .join("\n"),
    () => {
      const fitted = fittedDecompositions(session.read());
      const count = fitted.reduce((sum, { maps }) => sum + maps.filter((map) => "rv" in map).length, 0);
      section.hidden = count < 2;
      // Of several, the comparison is what is looked for.
      if (fitted.length > 1 && !offered) section.open = offered = true;
      ask();
    },
  );
}
