/** Dipoles of several recordings in one head, grouped by place and axis: whose they are, their spread, their mean maps. */

import { paintDipoleLegend } from "../draw/dipoles.js";
import { paintMapDisc } from "../draw/disc.js";
import { copyText } from "../export/out.js";
import { cellsText } from "../export/table.js";
import { memberText } from "../text/courses.js";
import { shortName, typeset } from "../text/figures.js";
import { mapWords, shareAtText, word } from "../text/words.js";
import { confirmOn } from "./confirm.js";
import { make, need, rewrite } from "./element.js";
import { figureTools, showFigure } from "./figure.js";
import { mapRowFigure, rasterAlt } from "./plates.js";
import { keepTyped } from "./setting.js";
import { fittedDecompositions, inOne } from "./several.js";
import { keepPainted, paintOn } from "./surface.js";
import { LEAST_VIEWS, SAVED_VIEWS, shellsOf, threeViews } from "./three_views.js";

/** @import { Session } from "../session/session.js" */

/** Pixels across the raster of a mean map, and maps that are asked for at once. */
const MEAN_RASTER = 48;
const MEAN_BATCH = 64;
/** The most groups that the engine makes, and members that are listed. */
const MOST_GROUPS = 24;
const MOST_LISTED = 200;
const GROUP_COLUMNS = ["group", "dipoles", "persons", "place", "spread", "turn", "rv"];
const PLACE_COLUMNS = ["x, mm", "y, mm", "z, mm"];

/** @param {number} at */
const groupName = (at) => `${word("groups.group")} ${at + 1}`;

/** The rim of a disc. */
const RIM = Float32Array.from({ length: 144 }, (_, at) => (at % 2 ? Math.sin : Math.cos)((Math.PI * (at >> 1)) / 36));

/** @param {Session} session */
export function showGroups(session) {
  const section = need("groups", HTMLDetailsElement);
  const which = need("groups-which", HTMLSelectElement);
  const count = need("groups-count", HTMLSelectElement);
  const status = need("groups-status", HTMLElement);
  const waits = [need("groups-progress", HTMLProgressElement), need("groups-stop", HTMLElement)];
  const [progress] = /** @type {[HTMLProgressElement]} */ (/** @type {unknown} */ (waits));
  const people = need("groups-people", HTMLTableElement);
  /** Recordings that are left out, by their ids. @type {Set<number>} */
  const out = new Set();
  /** What was grouped, and what of. @type {Groups | null} */
  let found = null;
  /** @type {{ decomposition: Decomposition, rows: { row: MapRow, index: number }[] }[]} */
  let members = [];
  let asked = "";
  /** What was given up. */
  let halted = "";

  /** What goes in of each recording. */
  function goingIn() {
    const { threshold } = session.read();
    return fittedDecompositions(session.read()).map(({ decomposition, maps }) => ({
      decomposition,
      rows: maps.flatMap((row, index) => ("rv" in row && (which.value === "all" || row.rv <= threshold) ? [{ row, index }] : [])),
    }));
  }

  /** @param {number} member @param {number} at */
  function dipoleOf(member, at) {
    const { decomposition, rows } = members[member];
    const { row, index } = rows[at];
    const radius = decomposition.answer?.preamble.head.radius_mm ?? 1;
    return { id: decomposition.id, index, row, position: row.canonical_mm.map((part) => part / radius), direction: row.canonical_direction, rv: row.rv };
  }

  const listed = () =>
    (found?.groups ?? []).flatMap(({ members: own, position, axis: direction }, at) => [
      ...own.map(([member, one]) => ({ ...dipoleOf(member, one), axis: true, at, faint: false })),
      { id: -1, index: -1, position, direction, rv: 0, axis: true, at, faint: false, bold: String(at + 1) },
    ]);

  /** @type {ReturnType<typeof listed>} */
  let dipoles = [];
  const three = threeViews(
    need("groups-views", HTMLElement),
    word("groups"),
    () => ({
      dipoles,
      chosen: -1,
      byRv: false,
      shells: shellsOf(members[0]?.decomposition.answer),
      spreads: (found?.groups ?? []).flatMap(({ ellipsoid }, at) => (ellipsoid === null ? [] : [{ ellipsoid, at }])),
    }),
    (at) => {
      const { id, index } = dipoles[at];
      if (id >= 0) openMap(id, index);
    },
  );
  const legendContent = () => ({
    byRv: false,
    threshold: 0,
    names: (found?.groups ?? []).map((_, at) => ({ name: groupName(at), at })),
    words: "",
  });
  const paint = keepPainted(section, (printing) => {
    if (found === null || !section.open) return;
    three.paint(printing);
    showFigure(need("groups-legend", HTMLElement), word("groups"), printing, (width, around, penAt) => paintDipoleLegend(penAt(0, 0), width, legendContent(), around));
    means.forEach((paintMean) => paintMean(printing));
  });

  /** @param {number} id @param {number} index */
  async function openMap(id, index) {
    await session.openDecomposition(id);
    await session.choose(index);
    need("sentence", HTMLElement).focus();
  }

  /** @param {boolean} busy */
  function wait(busy) {
    for (const one of waits) one.hidden = !busy;
    progress.removeAttribute("value");
  }

  /** What paints the mean maps. @type {((printing: boolean) => void)[]} */
  let means = [];
  /** What they are of. @type {Parameters<typeof mapRowFigure>[2]} */
  let drawn = [];
  /** Mean maps, one recording after the other. @param {string} mine @param {Groups} groups */
  async function average(mine, { groups }) {
    /** @type {[Float32Array, number][][]} */
    const rasters = groups.map(() => []);
    const total = groups.reduce((sum, group) => sum + group.members.length, 0);
    let done = 0;
    for (const [member, { decomposition, rows }] of members.entries()) {
      const wanted = groups.flatMap((group, at) => group.members.filter(([of]) => of === member).map(([, one]) => ({ at, index: rows[one].index })));
      for (; wanted.length > 0; progress.value = done / total) {
        const batch = wanted.splice(0, MEAN_BATCH);
        const small = await session.thumbnails(decomposition.id, batch.map(({ index }) => index), MEAN_RASTER);
        if (mine !== asked) return;
        done += batch.length;
        batch.forEach(({ at }, k) => {
          if (small !== null && small.limit[k] > 0) rasters[at].push([small.measured[k], small.rim_degrees]);
        });
      }
    }
    for (const [at, own] of rasters.entries()) {
      const figure = need("groups-maps", HTMLElement).children[at];
      const raster = own.length === 0 ? null : await session.meanRaster(own, MEAN_RASTER);
      if (mine !== asked) return;
      if (raster === null) {
        figure.append(make("p", word("groups.none"), { class: "small" }));
        continue;
      }
      const most = raster.reduce((most, value) => (Math.abs(value) > most ? Math.abs(value) : most), 1e-9);
      const canvas = /** @type {HTMLCanvasElement} */ (make("canvas", "", { class: "disc", role: "img", "aria-label": figure.textContent ?? "" }));
      figure.prepend(canvas);
      const mean = { raster, size: MEAN_RASTER, outline: RIM, sign: 1 / most, words: mapWords() };
      drawn.push({ heading: groupName(at), map: mean });
      canvas.setAttribute("aria-label", rasterAlt(`${word("groups.mean-of")} ${groupName(at)}`, mean));
      means.push((printing) => paintOn(canvas, printing, (surface, around) => paintMapDisc(surface, mean, around)));
      means[means.length - 1](false);
    }
  }

  function write() {
    need("groups-found", HTMLElement).hidden = found === null;
    need("groups-found", HTMLElement).classList.remove("waits");
    means = [];
    drawn = [];
    dipoles = listed();
    if (found === null) return;
    const { groups, sentence, notes, criterion, count: number } = found;
    need("groups-drawn", HTMLElement).hidden = groups.length === 0;
    rewrite(need("groups-sentence", HTMLElement), typeset(sentence));
    need("groups-notes", HTMLElement).replaceChildren(...notes.map((note) => make("li", typeset(note))));
    need("groups-maps", HTMLElement).replaceChildren(...groups.map((_, at) => {
      const figure = make("figure", "");
      figure.append(make("figcaption", groupName(at), { class: "small" }));
      return figure;
    }));
    fill("groups-table", groups.map(({ cells }, at) => [String(at + 1), ...cells]));
    need("groups-members", HTMLElement).replaceChildren(...groups.map(({ sentence: text, members: own }) => {
      const part = make("details", "");
      part.append(make("summary", typeset(text)));
      part.addEventListener("toggle", () => part.childElementCount > 1 || part.append(...own.slice(0, MOST_LISTED).map(([member, one]) => {
        const { id, index, row } = dipoleOf(member, one);
        const button = make("button", memberText(row, members[member].decomposition), { type: "button", class: "quiet" });
        button.addEventListener("click", () => openMap(id, index));
        return button;
      })));
      return part;
    }));
    need("groups-criterion", HTMLTableElement).hidden = criterion.length === 0;
    need("groups-criterion", HTMLTableElement).tBodies[0].replaceChildren(...criterion.map(({ groups: one, value, text }) => {
      const row = make("tr", "", one === number ? { "aria-current": "true" } : {});
      const bar = make("span", "", { class: "cause-bar", "aria-hidden": "true" });
      bar.style.setProperty("--share", String(Math.max(0, value)));
      const cell = make("td", typeset(text));
      cell.append(bar);
      row.append(make("th", String(one), { scope: "row" }), cell);
      return row;
    }));
    paint();
  }

  /** @param {string} id of a table @param {string[][]} rows */
  function fill(id, rows) {
    need(id, HTMLTableElement).tBodies[0].replaceChildren(...rows.map(([name, ...cells]) => {
      const row = make("tr", "");
      row.append(make("th", name, { scope: "row" }), ...cells.map((cell) => make("td", typeset(cell))));
      return row;
    }));
  }

  /** Recordings with whose they are. */
  function writePeople() {
    people.tBodies[0].replaceChildren(...goingIn().map(({ decomposition: { id, name, subject }, rows }) => {
      const row = make("tr", "");
      const label = make("label", "", { class: "tick" });
      const box = /** @type {HTMLInputElement} */ (make("input", "", { type: "checkbox", id: `grouped-${id}` }));
      box.checked = !out.has(id);
      box.addEventListener("change", () => {
        if (box.checked) out.delete(id);
        else out.add(id);
        ask();
      });
      label.append(box, make("span", shortName(name)));
      const field = /** @type {HTMLInputElement} */ (
        make("input", "", { type: "text", autocomplete: "off", id: `person-${id}`, value: subject, placeholder: word("groups.own"), "aria-label": `${word("groups.person")}: ${shortName(name)}` })
      );
      field.addEventListener("change", () => session.setSubject(id, field.value));
      const [heading, whose] = [make("th", "", { scope: "row" }), make("td", "")];
      heading.append(label);
      whose.append(field);
      row.append(heading, whose, make("td", String(rows.length)));
      return row;
    }));
  }

  async function ask() {
    const { threshold, stopped } = session.read();
    const fitted = fittedDecompositions(session.read());
    section.hidden = fitted.length < 2;
    if (section.hidden || !section.open) return;
    const [near] = which.options;
    rewrite(near, `${word("groups.near")}: ${shareAtText(threshold)}`);
    const whole = fitted.every(({ decomposition: { answer } }) => answer?.fitted === answer?.count) || stopped;
    const mine = JSON.stringify([
      fitted.map(({ decomposition: { id, name, subject, answer } }) => [id, name, subject, answer?.key, answer?.fitted]),
      [...out], threshold, which.value, count.value, whole,
    ]);
    if (mine === asked || mine === halted) return;
    if (asked !== "") session.giveUp("groups");
    asked = mine;
    keepTyped(people.tBodies[0], writePeople);
    status.textContent = whole ? "" : word("groups.waiting");
    wait(whole);
    if (!whole) return;
    members = goingIn().filter(({ decomposition: { id } }) => !out.has(id));
    const request = {
      members: members.map(({ decomposition: { name, subject }, rows }, member) => ({
        name,
        subject: subject || null,
        dipoles: rows.map(({ index }, at) => {
          const { position, direction, rv } = dipoleOf(member, at);
          return { map: index, position, direction, rv };
        }),
      })),
      groups: count.value === "" ? null : Number(count.value),
    };
    try {
      found = null;
      need("groups-found", HTMLElement).classList.add("waits");
      const groups = await session.groups(request);
      if (mine !== asked) return;
      found = groups;
      write();
      if (groups !== null) await average(mine, groups);
    } catch (error) {
      if (mine !== asked) return;
      const { message, hint } = /** @type {Fault} */ (error);
      status.textContent = typeset([message, hint].join(" "));
      write();
    }
    if (mine === asked) wait(false);
  }

  need("groups-stop", HTMLElement).addEventListener("click", () => {
    halted = asked;
    asked = "";
    session.giveUp("groups");
    wait(false);
    found = null;
    write();
    status.textContent = word("course.stopped");
  });
  need("copy-groups", HTMLElement).addEventListener("click", async () => {
    const named = need("groups-names", HTMLInputElement).checked;
    /** Names may be private: what leaves has numbers instead, unless they are asked for. @type {Map<string, number>} */
    const numbers = new Map();
    /** @param {number} member */
    const person = (member) => {
      const { subject, id } = members[member].decomposition;
      const key = subject || `#${id}`;
      numbers.set(key, numbers.get(key) ?? numbers.size + 1);
      return named && subject !== "" ? subject : String(numbers.get(key));
    };
    members.forEach((_, member) => person(member));
    const heads = GROUP_COLUMNS.flatMap((code) => (code === "place" ? PLACE_COLUMNS : word(`groups.${code}`)));
    const each = (found?.groups ?? []).flatMap((group, at) => group.members.map(([member, one]) => {
      const { row } = dipoleOf(member, one);
      return [String(at + 1), person(member), named ? members[member].decomposition.name : String(member + 1), row.name, ...["x", "y", "z", "rv"].map((code) => row.cells[session.read().columns.findIndex((column) => column.code === code)] ?? "")];
    }));
    confirmOn(need("copy-groups", HTMLButtonElement), await copyText(cellsText([
      heads,
      ...(found?.groups ?? []).map(({ cells }, at) => [String(at + 1), ...cells.flatMap((cell) => cell.split(", "))]),
      [],
      [...["group", "person", "recording", "map"].map((code) => word(`groups.${code}`)), ...PLACE_COLUMNS.map((column) => `${column} (${word("groups.own-head")})`), "RV, %"],
      ...each,
    ])));
  });
  figureTools(session, need("groups-tools", HTMLElement), () =>
    found && {
      name: "inward-groups",
      title: word("groups"),
      description: [found.sentence, ...found.notes].join(" "),
      width: SAVED_VIEWS,
      least: LEAST_VIEWS,
      paint: (width, around, penAt) => {
        const top = three.save(width, around, penAt) + 12;
        return top + paintDipoleLegend(penAt(0, top), width, legendContent(), around);
      },
    },
  );
  figureTools(session, need("means-tools", HTMLElement), () => mapRowFigure("inward-group-means", word("groups.maps"), drawn));
  for (const [id, codes] of /** @type {[string, string[]][]} */ ([["groups-people", ["recording", "person", "dipoles"]], ["groups-table", GROUP_COLUMNS]])) {
    need(id, HTMLTableElement).tHead?.rows[0].append(...codes.map((code) => make("th", word(`groups.${code}`), { scope: "col" })));
  }
  count.append(make("option", word("automatic"), { value: "" }), ...Array.from({ length: MOST_GROUPS }, (_, at) => make("option", String(at + 1))));
  for (const control of [which, count]) control.addEventListener("change", ask);
  section.addEventListener("toggle", () => {
    halted = "";
    ask();
  });
  const askSoon = inOne(ask);
  session.watch((state) => state.decompositions, askSoon);
  session.watch((state) => state.threshold, askSoon);
  session.watch((state) => state.stopped, askSoon);
}
