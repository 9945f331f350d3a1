/** Every fitted dipole of a decomposition, or of all, in one head: coloured by residual variance or by decomposition. */

import { paintDipoleLegend } from "../draw/dipoles.js";
import { outwardNames } from "../session/outward.js";
import { dipoleCountText, dipoleText, shareAtText, word } from "../text/words.js";
import { shortName } from "../text/figures.js";
import { need } from "./element.js";
import { figureTools, showFigure } from "./figure.js";
import { fittedDecompositions, seriesOf, inOne } from "./several.js";
import { keepPainted } from "./surface.js";
import { LEAST_VIEWS, SAVED_VIEWS, shellsOf, threeViews } from "./three_views.js";

/** @import { Session } from "../session/session.js" */
/** @import { ManyDipole } from "../draw/dipoles.js" */

/** @typedef {ManyDipole & { id: number, index: number, name: string, row: MapRow }} ListedDipole */

/** @param {Session} session */
export function showAllDipoles(session) {
  const section = need("all-dipoles", HTMLDetailsElement);
  const views = need("dipole-views", HTMLElement);
  const which = need("dipoles-of", HTMLSelectElement);
  const above = need("dipoles-above", HTMLSelectElement);
  const colours = need("dipole-colours", HTMLElement);
  const legend = need("dipole-legend", HTMLElement);
  const said = need("dipole-said", HTMLElement);
  const open = need("dipole-open", HTMLButtonElement);
  /** @type {ListedDipole[]} */
  let dipoles = [];
  /** @type {{ id: number, index: number } | null} */
  let chosen = null;
  let byRv = true;
  let spoken = "";

  const shown = () => {
    const all = fittedDecompositions(session.read());
    return which.value === "all" ? all : all.filter(({ decomposition }) => decomposition.id === session.read().current);
  };
  const chosenAt = () => dipoles.findIndex(({ id, index }) => id === chosen?.id && index === chosen.index);

  function list() {
    const { threshold } = session.read();
    const series = seriesOf(session.read());
    dipoles = shown().flatMap(({ decomposition, maps }) => {
      const { answer, id, name } = decomposition;
      const at = series.get(id) ?? 0;
      const radius = answer?.preamble.head.radius_mm ?? 1;
      const axis = answer?.settings.polarity !== "declared";
      return maps.flatMap((row, index) => {
        if (!("rv" in row) || (above.value === "hidden" && row.rv > threshold)) return [];
        const position = row.canonical_mm.map((part) => part / radius);
        const faint = above.value === "faint" && row.rv > threshold;
        return [{ position, direction: row.canonical_direction, axis, rv: row.rv, at, faint, id, index, name, row }];
      });
    });
  }

  const three = threeViews(
    views,
    word("dipoles"),
    (marked) => ({ dipoles, chosen: marked ? chosenAt() : -1, byRv, shells: shellsOf(shown()[0]?.decomposition.answer) }),
    (at) => choose(at, true),
  );
  /** @param {Map<number, { name: string }>} [labels] in place of their names */
  function legendContent(labels) {
    const series = seriesOf(session.read());
    const names = new Map(shown().map(({ decomposition }) => [series.get(decomposition.id) ?? 0, shortName((labels?.get(decomposition.id) ?? decomposition).name)]));
    return {
      byRv,
      threshold: session.read().threshold,
      names: [...names].map(([at, name]) => ({ name, at })),
      words: word("dipoles.rv"),
    };
  }

  const paint = keepPainted(section, (printing) => {
    three.paint(printing);
    showFigure(legend, word("dipoles.legend"), printing, (width, around, penAt) =>
      paintDipoleLegend(penAt(0, 0), width, legendContent(), around),
    );
  });

  /** Says which one is chosen, and offers the way to it. */
  function tell() {
    const at = chosenAt();
    open.hidden = at < 0;
    const text = at < 0 ? word("dipoles.use") : dipoleText(dipoles[at].row, which.value === "all" ? dipoles[at].name : "");
    if (text !== spoken) said.textContent = text;
    spoken = text;
  }

  /** @param {number} at @param {boolean} opening of a decomposition that is not open */
  async function choose(at, opening) {
    const { id, index } = dipoles[at];
    chosen = { id, index };
    tell();
    paint();
    if (id !== session.read().current) {
      if (!opening) return;
      await session.openDecomposition(id);
    }
    if (session.read().answer?.chosen !== index) await session.choose(index);
  }

  views.addEventListener("keydown", (event) => {
    if (event.ctrlKey || event.metaKey || event.altKey || dipoles.length === 0) return;
    const at = chosenAt();
    const last = dipoles.length - 1;
    /** @type {Record<string, number>} */
    const moves = {
      ArrowRight: Math.min(last, at + 1),
      ArrowDown: Math.min(last, at + 1),
      ArrowLeft: Math.max(0, at - 1),
      ArrowUp: Math.max(0, at - 1),
      Home: 0,
      End: last,
    };
    if (moves[event.key] !== undefined) choose(moves[event.key], false);
    else if (event.key === "Enter" && at >= 0) choose(at, true);
    else return;
    event.preventDefault();
  });
  open.addEventListener("click", async () => {
    const at = chosenAt();
    if (at < 0) return;
    await choose(at, true);
    need("sentence", HTMLElement).focus();
  });

  function update() {
    const fitted = fittedDecompositions(session.read());
    const all = fitted.reduce((sum, { maps }) => sum + maps.filter((map) => "rv" in map).length, 0);
    section.hidden = all < 2;
    need("dipoles-which", HTMLElement).hidden = fitted.length < 2;
    if (fitted.length < 2) which.value = "one";
    colours.hidden = which.value !== "all";
    if (colours.hidden) byRv = true;
    else byRv = colours.querySelector("input:checked")?.getAttribute("value") === "rv";
    if (section.hidden || !section.open) return;
    list();
    const radii = new Set(shown().map(({ decomposition }) => decomposition.answer?.preamble.head.radius_mm));
    const listed = shown().reduce((sum, { maps }) => sum + maps.filter((map) => "rv" in map).length, 0);
    need("dipoles-count", HTMLElement).textContent = [
      dipoleCountText(dipoles.length, listed, above.value === "shown" ? "" : shareAtText(session.read().threshold), above.value),
      radii.size > 1 ? word("dipoles.radii") : "",
    ].filter((text) => text).join(" ");
    tell();
    paint();
  }
  section.addEventListener("toggle", update);
  for (const control of [which, above, colours]) control.addEventListener("change", update);

  figureTools(session, need("dipole-tools", HTMLElement), () => ({
    name: "inward-dipoles",
    title: word("dipoles"),
    description: need("dipoles-count", HTMLElement).textContent ?? "",
    width: SAVED_VIEWS,
    least: LEAST_VIEWS,
    paint: (width, around, penAt) => {
      const below = three.save(width, around, penAt) + 12;
      return below + paintDipoleLegend(penAt(0, below), width, legendContent(outwardNames(session.read()).decompositions), around);
    },
  }), views);

  session.watch(
    ({ answer }) => answer?.chosen,
    (index) => {
      if (index !== undefined) chosen = { id: session.read().current, index };
      update();
    },
  );
  const updateSoon = inOne(update);
  for (const pick of /** @type {((state: SessionState) => unknown)[]} */ ([
    (state) => state.decompositions,
    (state) => state.threshold,
    (state) => state.current,
  ])) {
    session.watch(pick, updateSoon);
  }
}
