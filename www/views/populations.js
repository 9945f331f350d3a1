/** Simulated maps for the same electrodes and head: curves of residual variance, densities by eccentricity, and their numbers. */

import { paintShares, sharesHeight } from "../draw/curves.js";
import { letterFont, writeWrapped } from "../draw/marks.js";
import { densityCounts, paintDensities } from "../draw/density.js";
import { copyText } from "../export/out.js";
import { cellsText, plainNumber } from "../export/table.js";
import { typeset } from "../text/figures.js";
import { thisMapText } from "../text/trust.js";
import { word } from "../text/words.js";
import { confirmOn } from "./confirm.js";
import { make, need } from "./element.js";
import { figureTools, showFigure } from "./figure.js";
import { keepPainted } from "./surface.js";

/** @import { Session } from "../session/session.js" */
/** @import { ShareLine } from "../draw/curves.js" */
/** @import { FigurePainter } from "./figure.js" */

/** Points of a curve; the lowest draws each have one. */
const POINTS = 400;
const LOWEST_POINTS = 10;
const SAVED_WIDE = 720;
const RULE_LINE = 15;

/** Each population with any draws, as a curve. @param {Populations | null} populations @returns {ShareLine[]} */
export function populationLines(populations) {
  return drawnKinds(populations).map(({ kind, at, numbers }) => {
    const all = numbers.filter((_, place) => place % 2 === 0).sort();
    const steps = Array.from({ length: POINTS }, (_, k) => Math.ceil(((k + 1) * all.length) / POINTS) - 1);
    const lowest = Array.from({ length: Math.min(LOWEST_POINTS, all.length) }, (_, k) => k);
    const places = [...new Set([...lowest, ...steps])].sort((a, b) => a - b);
    return {
      name: word(`populations.kind.${kind}`),
      at,
      rv: places.map((place) => all[place]),
      share: places.map((place) => (place + 1) / all.length),
      low: null,
      high: null,
      steps: false,
    };
  });
}

/** @param {Populations | null} populations */
function drawnKinds(populations) {
  const all = Object.entries(populations?.kinds ?? {}).map(([kind, numbers], at) => ({ kind, numbers, at }));
  return all.filter(({ numbers }) => numbers.length > 1);
}

/**
 * A figure with the rule of its sources below it, in as many lines as that takes.
 * @param {string} rule
 * @param {FigurePainter} paintOne
 * @returns {FigurePainter}
 */
export function withRule(rule, paintOne) {
  return (width, around, penAt) => {
    const height = paintOne(width, around, penAt);
    const pen = penAt(0, height);
    pen.font = letterFont(around);
    pen.fillStyle = around.ink;
    return height + RULE_LINE * (1 + writeWrapped(pen, typeset(rule), 8, RULE_LINE, width - 16, RULE_LINE));
  };
}

/** Heads and rows of the table, as text. @param {Trust["populations"]} populations */
function populationCells(populations) {
  const heading = ["kind", "draws", "median", "range", "lower", "lower-here", "boundary"];
  return {
    heading: heading.map((code) => word(`populations.${code}`)),
    rows: populations.map((one) => [
      one.label,
      one.draws.toLocaleString("en-GB"),
      one.median,
      `${one.percentile_5}–${one.percentile_95}`,
      one.share_lower,
      one.share_lower_here,
      one.boundary,
    ]),
  };
}

/** @param {Session} session */
export function showPopulations(session) {
  const curves = need("population-curves", HTMLElement);
  const density = need("population-density", HTMLElement);
  const copy = need("copy-populations", HTMLButtonElement);
  /** Made anew only when draws have come in. @type {{ of: Populations | null, lines: ShareLine[], panels: { title: string, counts: number[] }[] }} */
  let made = { of: null, lines: [], panels: [] };

  function drawn() {
    const { populations } = session.read();
    if (made.of !== populations) {
      const panels = drawnKinds(populations).map(({ kind, numbers }) => ({
        title: word(`populations.kind.${kind}`),
        counts: densityCounts(numbers),
      }));
      made = { of: populations, lines: populationLines(populations), panels };
    }
    return made;
  }

  function here() {
    const { answer } = session.read();
    const map = answer?.sheet ? answer.maps[answer.chosen] : undefined;
    return map !== undefined && "rv" in map ? map : null;
  }

  /** @type {FigurePainter} */
  const paintCurves = (width, around, penAt) => {
    const rv = here()?.rv ?? 1;
    const height = sharesHeight(width, 0);
    paintShares({ pen: penAt(0, 0), width, height }, {
      lines: [],
      behind: drawn().lines,
      logarithmic: true,
      most: 1,
      threshold: rv,
      told: thisMapText(rv),
      pointed: null,
      words: { x: word("shares.x"), y: word("populations.curves") },
    }, around);
    return height;
  };
  /** @type {FigurePainter} */
  const paintDensity = (width, around, penAt) => {
    const { rv, eccentricity } = here() ?? { rv: 1, eccentricity: 0 };
    const words = { x: word("populations.eccentricity"), y: word("populations.rv"), here: word("populations.here") };
    return paintDensities(penAt, width, { panels: drawn().panels, here: { rv, eccentricity }, words }, around);
  };

  const paint = keepPainted(need("populations", HTMLElement), (printing) => {
    if (here() === null || drawn().lines.length === 0) return;
    showFigure(curves, word("populations.curves"), printing, paintCurves);
    showFigure(density, word("populations.density"), printing, paintDensity);
  });

  /** @param {string} id @param {string} name @param {string} title @param {FigurePainter} paintOne */
  const tools = (id, name, title, paintOne) =>
    figureTools(session, need(id, HTMLElement), () => {
      const trust = session.read().answer?.trust;
      if (!trust) return null;
      const sentences = trust.populations.map(({ sentence }) => sentence);
      // Head, depth, number and orientation go along with the figure.
      return {
        name,
        title: word(title),
        description: [...sentences, trust.rule].join(" "),
        width: SAVED_WIDE,
        paint: withRule(trust.rule, paintOne),
      };
    }, curves);
  tools("curve-tools", "inward-reference-populations", "populations.curves", paintCurves);
  tools("density-tools", "inward-eccentricity", "populations.density", paintDensity);

  copy.addEventListener("click", async () => {
    const { heading, rows } = populationCells(session.read().answer?.trust?.populations ?? []);
    confirmOn(copy, await copyText(cellsText([heading, ...rows.map(([label, draws, ...cells]) => [label, plainNumber(draws), ...cells])])));
  });

  session.watch(
    ({ answer }) => answer?.trust,
    (trust) => {
      const populations = trust?.populations ?? [];
      const { heading, rows } = populationCells(populations);
      const table = need("population-table", HTMLTableElement);
      table.tHead?.rows[0].replaceChildren(...heading.map((text) => make("th", text, { scope: "col" })));
      table.tBodies[0].replaceChildren(...rows.map(([label, ...cells], at) => {
        const row = make("tr", "", { "data-kind": populations[at].kind });
        row.append(make("th", typeset(label), { scope: "row" }), ...cells.map((cell) => make("td", typeset(cell))));
        return row;
      }));
      need("population-sentences", HTMLElement).replaceChildren(...populations.map(({ sentence }) => make("li", typeset(sentence))));
      for (const element of document.querySelectorAll(".population-rule")) element.textContent = typeset(trust?.rule ?? "");
    },
  );
  function show() {
    const some = drawnKinds(session.read().populations).length > 0;
    need("populations-drawn", HTMLElement).hidden = !some;
    need("populations-none", HTMLElement).hidden = some;
    paint();
  }
  session.watch(({ populations }) => populations, show);
  session.watch(({ answer }) => answer?.sheet, paint);
}
