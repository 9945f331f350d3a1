/** The words of the trade that this page uses, each with a line on what it means. */

/**
 * `words` are the forms under which a term is recognised in a sentence, the first one is its name. Those that stand
 * in nearly every sentence are `everywhere`: marking them would be noise, so they are explained at the foot alone.
 * @type {{ code: string, words: string[], line: string, everywhere?: boolean }[]}
 */
export const TERMS = [
  {
    code: "map",
    words: ["map", "scalp map"],
    everywhere: true,
    line: "One value per electrode: an independent component’s weights, an averaged response, or one moment of a recording.",
  },
  {
    code: "electrode",
    words: ["electrode", "electrodes"],
    everywhere: true,
    line: "A contact on the scalp with a label, a place and a value.",
  },
  {
    code: "component",
    words: ["component"],
    line: "One part of a decomposed recording: a map that stays and an activation that varies. Their signs can be swapped together.",
  },
  {
    code: "decomposition",
    words: ["decomposition", "decompositions"],
    line: "A recording taken apart into components by one method: a table of maps, one for each component.",
  },
  {
    code: "activation",
    words: ["activation"],
    line: "How strongly a component is present, moment by moment; its scale is shared out arbitrarily between it and the map.",
  },
  {
    code: "dipole",
    words: ["equivalent dipole", "dipole"],
    line: "A point-like current with a place, a direction and a strength; equivalent, because it stands for whatever made the map.",
  },
  {
    code: "residual-variance",
    words: ["residual variance", "RV"],
    line: "Share of the map’s power that the dipole does not reproduce. Low says it fits; it does not say the source is single.",
  },
  {
    code: "variance-explained",
    words: ["variance explained"],
    line: "Share of the map’s power that the dipole reproduces: 100 % less the residual variance.",
  },
  {
    code: "adjusted-rv",
    words: ["adjusted residual variance"],
    line: "Residual variance with the price of seven fitted numbers taken in, so that few and many electrodes compare.",
  },
  {
    code: "degrees-of-freedom",
    words: ["degrees of freedom"],
    line: "How many values are left to contradict the dipole: electrodes less one reference, three of position, three of moment.",
  },
  {
    code: "average-reference",
    words: ["average reference", "average-referenced"],
    line: "Every value is taken relative to the mean of the electrodes used, in the map and in the model alike.",
  },
  {
    code: "spherical-model",
    words: ["spherical model", "head model"],
    line: "The head as nested spheres of constant conductivity; simple, exact to compute, and about 10 mm off a real head.",
  },
  {
    code: "shell",
    words: ["shell", "shells"],
    line: "One layer of the head model, such as skull or scalp, with its outer radius and conductivity.",
  },
  {
    code: "conductivity",
    words: ["conductivity", "conductivities"],
    line: "How well a tissue carries current, in siemens per metre; the skull’s is the least certain of all.",
  },
  {
    code: "fitted-sphere",
    words: ["fitted sphere", "fitted to the electrodes"],
    line: "The sphere that comes closest to all electrodes; it stands for the scalp, and they are projected onto it.",
  },
  {
    code: "rms",
    words: ["rms", "root mean square"],
    line: "Root mean square: the typical size of many deviations, large ones counting more.",
  },
  {
    code: "equivalent-position",
    words: ["equivalent position"],
    line: "Where the one dipole fits best. Extended sources fit too deep, and two sources can fit in between.",
  },
  {
    code: "model-depth",
    words: ["model depth"],
    line: "Distance from the position straight outwards to the inner skull of the model.",
  },
  {
    code: "eccentricity",
    words: ["eccentricity"],
    line: "Distance from the centre over the radius of the modelled brain: 0 in the middle, 1 at its edge.",
  },
  {
    code: "moment",
    words: ["moment", "moments"],
    line: "Direction and strength of the dipole’s current, in nanoampere metres (nAm) when the map’s unit is known.",
  },
  {
    code: "radial-share",
    words: ["radial share"],
    line: "Part of the squared moment that points straight outwards; 1 is radial, 0 runs along the scalp.",
  },
  {
    code: "polarity",
    words: ["polarity"],
    line: "Which end of the map is positive. A component’s is arbitrary: the dipole is then an axis, not an arrow.",
  },
  {
    code: "canonical-frame",
    words: ["canonical frame"],
    line: "x to the right, y to the front, z up, from the sphere’s centre, in millimetres.",
  },
  {
    code: "standard-positions",
    words: ["standard positions", "standard site", "standard sites", "10-10"],
    line: "Idealised places of the 10-10 system on a sphere, found by label; your electrodes may sit up to a centimetre off.",
  },
  {
    code: "contour-line",
    words: ["contour lines", "contour line"],
    line: "A line of equal value: solid where positive, dashed where negative.",
  },
  {
    code: "reference-population",
    words: ["reference population", "reference populations", "reference maps"],
    line: "Simulated maps of noise, one, two, five, twenty or a hundred dipoles, for the same electrodes and head.",
  },
  {
    code: "mirrored-pair",
    words: ["mirrored pair", "paired"],
    line: "Two dipoles at mirrored places, left and right of the head’s mid-plane, each with a moment of its own.",
  },
  {
    code: "left-over",
    words: ["left-over map", "left over"],
    line: "What the dipole does not reproduce: measured less one dipole, electrode by electrode.",
  },
];

const BY_WORD = new Map(
  TERMS.filter((term) => !term.everywhere).flatMap((term) => term.words.map((form) => [form.toLowerCase(), term])),
);

const LONGEST_FIRST = [...BY_WORD.keys()].sort((a, b) => b.length - a.length);

/** Any term as a whole word. */
const TERM_PATTERN = new RegExp(
  `(?<![\\p{L}\\d-])(${LONGEST_FIRST.map((form) => form.replaceAll(" ", "\\s")).join("|")})(?![\\p{L}\\d-])`,
  "giu",
);

/** @param {string} code */
export function termOf(code) {
  const term = TERMS.find((one) => one.code === code);
  if (term === undefined) throw new TypeError(`no term ${code}`);
  return term;
}

/**
 * A sentence in pieces: plain text, and terms where they first occur.
 * @param {string} text
 * @param {Set<string>} told codes of terms that need no mark any more; grows
 * @returns {{ text: string, code: string | null }[]}
 */
export function termPieces(text, told) {
  /** @type {{ text: string, code: string | null }[]} */
  const pieces = [];
  let from = 0;
  for (const found of text.matchAll(TERM_PATTERN)) {
    const term = BY_WORD.get(found[0].toLowerCase().replace(/\s/g, " "));
    if (term === undefined || told.has(term.code)) continue;
    told.add(term.code);
    if (found.index > from) pieces.push({ text: text.slice(from, found.index), code: null });
    pieces.push({ text: found[0], code: term.code });
    from = found.index + found[0].length;
  }
  if (from < text.length) pieces.push({ text: text.slice(from), code: null });
  return pieces;
}
