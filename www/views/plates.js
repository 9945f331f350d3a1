/** The figures of one map, for the tools beside them and for whatever else leaves the page: what is in them, from its answer. */

import { paintEquation, paintMapRow, paintSlices, paintViews } from "../draw/plates.js";
import { leastOf } from "../draw/landscape.js";
import { percentText, stretchText, typeset } from "../text/figures.js";
import { beginning } from "../text/trust.js";
import { extremesText, mapWords, scaleText, standpointText, symbolOf, word } from "../text/words.js";

/** @import { HeadContent, Side, Standpoint } from "../draw/head.js" */
/** @import { OtherKind, RegionMarks } from "../draw/region.js" */
/** @import { MapContent } from "../draw/disc.js" */
/** @import { FigureParts } from "./figure.js" */

/** @typedef {SessionState["explained"]["hand"]} Hand */
/** @typedef {Exclude<keyof RegionMarks, "others"> | OtherKind} MarkKind */
/** What is told of a map besides its best fit. @typedef {{ region?: Trust["region"] | null, alternatives?: Alternatives | null, hand?: Hand }} ToldOfMap */

/** @type {MapRole[]} */
export const ROLES = ["measured", "projected", "residual"];

/** @type {{ view: Exclude<HeadView, "turned">, from: Standpoint, sides: Side[] }[]} */
export const HEAD_VIEWS = [
  { view: "above", from: { turn: 0, tilt: 90 }, sides: ["left", "right", "front"] },
  { view: "behind", from: { turn: 0, tilt: 0 }, sides: ["left", "right"] },
  { view: "left", from: { turn: 90, tilt: 0 }, sides: ["front", "back"] },
];
/** Where the fourth view begins. */
export const OBLIQUE = { turn: 35, tilt: 25 };

/** Words of the marks in the views. @type {[MarkKind, string][]} */
const MARK_WORDS = [
  ["cloud", "region.cloud"],
  ["errors", "region.errors"],
  ["noise", "region.noise"],
  ["repeats", "region.points"],
  ["second-minimum", "alternatives.second-minimum"],
  ["mirrored-pair", "alternatives.mirrored-pair"],
  ["two-dipoles", "alternatives.two-dipoles"],
  ["hand", "hand.mark"],
];

/** What is drawn into the views besides the best fit. @param {ToldOfMap} told @param {(kind: MarkKind) => boolean} [shown] @returns {RegionMarks} */
export function marksOf({ region, alternatives, hand }, shown = () => true) {
  return {
    cloud: (shown("cloud") && region?.cloud) || [],
    errors: (shown("errors") && region?.ellipsoid) || null,
    noise: (shown("noise") && region?.noise_only) || null,
    repeats: (shown("repeats") && region?.repeats?.points) || [],
    others: [
      ...(alternatives?.kinds ?? []).flatMap(({ kind, dipoles }) => (kind !== "single" && shown(kind) ? dipoles.map((dipole) => ({ kind, ...dipole })) : [])),
      ...(hand ? [{ kind: /** @type {const} */ ("hand"), position: hand.at, direction: hand.direction }] : []),
    ],
  };
}

/** The picture of a map, and the dipole in it: moved by hand they are no longer those of the fit. @param {Sheet} sheet @param {Hand} [hand] */
export function pictureOf(sheet, hand) {
  return {
    picture: hand?.picture ?? sheet.picture,
    figure: hand ? { ...sheet.figure, dipole: { position: hand.at, direction: hand.direction } } : sheet.figure,
  };
}

/** A map in words. @param {Sheet} sheet @param {MapRole} role @param {Hand} [hand] */
export function mapAlt({ alt }, role, hand) {
  return typeset(hand && role !== "measured" ? `${word(`map.${role}`)}, ${word("hand.moved")}: ${hand.sentence}` : alt[role]);
}

/** The ends of the scale in words. @param {Sheet} sheet */
export function scaleEnds({ scale: { limit, unit } }) {
  const [low, high] = ["-", "+"].map((sign) => typeset(`${sign}${limit} ${symbolOf(unit)}`.trim()));
  return { low, high };
}

/** What a disc of the three shows. @param {Sheet} sheet @param {MapRole} role @param {Hand} [hand] @param {number} [pointed] */
export function discOf(sheet, role, hand, pointed = -1) {
  const { picture, figure } = pictureOf(sheet, hand);
  const stretched = role === "residual" && picture.stretch !== 1 ? stretchText(picture.stretch) : "";
  return { picture, role, dipole: role === "projected", figure, pointed, stretched, words: mapWords() };
}

/** The three maps with their scale. @param {Sheet} sheet @param {Hand} [hand] @returns {FigureParts} */
export function mapsFigure(sheet, hand) {
  const { stretch } = pictureOf(sheet, hand).picture;
  const discs = ROLES.map((role) => {
    const moved = hand && role === "projected" ? "hand.projected" : `map.${role}`;
    const disc = discOf(sheet, role, hand);
    return { heading: `${word(moved)} ${disc.stretched}`.trim(), disc };
  });
  const scale = { ...scaleEnds(sheet), words: scaleText(sheet.scale.unit, stretch === 1 ? "" : stretchText(stretch)) };
  return {
    name: "inward-maps",
    title: word("maps.title"),
    description: ROLES.map((role) => mapAlt(sheet, role, hand)).join(" "),
    width: 720,
    least: 440,
    paint: (width, around, penAt) => paintEquation(width, around, penAt, { discs, scale }),
  };
}

/** A view of the head. @param {Sheet} sheet @param {RegionMarks} region @param {Standpoint} from @param {Side[]} sides @param {string} seen @returns {HeadContent} */
export function headOf({ figure, picture }, region, from, sides, seen) {
  return {
    figure,
    electrodes: picture.electrodes,
    pointed: -1,
    from,
    letters: sides.map((side) => ({ side, text: word(`map.${side}`) })),
    seen,
    region,
  };
}

/**
 * The dipole in the head from four sides, with what is drawn around it.
 * @param {Sheet} sheet
 * @param {ToldOfMap} told
 * @param {{ turned?: Standpoint, shown?: (kind: MarkKind) => boolean }} [options]
 * @returns {FigureParts}
 */
export function headFigure(sheet, told, { turned = OBLIQUE, shown } = {}) {
  const marks = marksOf(told, shown);
  const views = HEAD_VIEWS.map(({ view, from, sides }) => headOf(sheet, marks, from, sides, word(`view.${view}`)));
  views.push(headOf(sheet, marks, turned, ["left", "right", "front"], standpointText(turned.turn, turned.tilt)));
  /** @param {MarkKind} kind */
  const there = (kind) => (kind in marks ? [/** @type {any} */ (marks)[kind]].flat().some((one) => one !== null) : marks.others.some((other) => other.kind === kind));
  const { alt } = sheet;
  return {
    name: "inward-head",
    title: word("where"),
    description: typeset([alt.above, alt.behind, alt.left, told.region?.alt ?? "", beginning(told.alternatives?.alt ?? "")].join(" ").trim()),
    width: 880,
    least: 400,
    paint: (width, around, penAt) =>
      paintViews(width, around, penAt, { views, marks: MARK_WORDS.filter(([kind]) => there(kind)).map(([kind, code]) => ({ kind, text: word(code) })) }),
  };
}

/** Residual variance over the brain in three slices. @param {Sheet} sheet @param {Landscape} landscape @param {Hand} [hand] @returns {FigureParts} */
export function slicesFigure({ figure }, landscape, hand = null) {
  const slices = HEAD_VIEWS.flatMap(({ view, from, sides }) => {
    const letters = sides.map((side) => ({ side, text: word(`map.${side}`) }));
    return landscape.slices
      .filter((slice) => slice.view === view)
      .map((slice) => ({ landscape, slice, figure, hand, felt: null, from, letters, seen: word(`view.${view}`) }));
  });
  const scale = { low: percentText(leastOf(landscape)), high: percentText(1), words: word("slices.scale") };
  return {
    name: "inward-slices",
    title: word("slices"),
    description: typeset([landscape.sentence, ...landscape.slices.map(({ alt }) => alt)].join(" ")),
    width: 750,
    least: 320,
    paint: (width, around, penAt) => paintSlices(width, around, penAt, { slices, scale, levels: landscape.levels.map(({ label }) => typeset(label)) }),
  };
}

/** A map without electrodes, in words. @param {string} name @param {MapContent} map */
export function rasterAlt(name, { raster, size, sign }) {
  const ends = [sign, -sign].map((turn) => {
    const best = raster.reduce((best, value, at) => (Number.isNaN(value) || turn * value <= turn * raster[best] ? best : at), raster.findIndex((value) => !Number.isNaN(value)));
    return /** @type {[number, number]} */ ([((best % size) + 0.5) / size, (Math.floor(best / size) + 0.5) / size]);
  });
  return `${name}, ${word("map.above")}: ${extremesText(ends)}`;
}

/** Maps side by side, each on its own scale. @param {string} name @param {string} title @param {{ heading: string, map: MapContent }[]} maps @returns {FigureParts | null} */
export function mapRowFigure(name, title, maps) {
  if (maps.length === 0) return null;
  const description = [...maps.map(({ heading, map }) => `${rasterAlt(heading, map)}.`), word("figure.own-scales")].join(" ");
  return { name, title, description, width: Math.min(4, maps.length) * 180, least: 260, paint: (width, around, penAt) => paintMapRow(width, around, penAt, maps) };
}
