/** The words of how far to trust a fit: verdict, region, reference populations and what they rest on. */

import { enteredText, leftText, NO_BREAK, percentText, typeset } from "./figures.js";

/** @type {Record<string, string>} */
export const TRUST_WORDS = {
  trust: "How far to trust it",
  "verdict.waiting": "The verdict follows when the reference maps are drawn.",
  "verdict.stopped": "Drawing was stopped before there were reference maps enough for a verdict.",
  "verdict.part": "So far: by a part of the reference maps.",
  "verdict.stop": "Stop drawing",
  "verdict.go": "Continue drawing",
  "verdict.progress": "Reference maps drawn",
  "verdict.why": "Reasons, region and reference populations",
  "verdict.reasons": "Reasons of the verdict",
  "verdict.hints": "Hints on origin (common practice, no source)",
  verdict: "Verdict",
  "verdict.all": "all",
  "verdict.dipolar": "dipolar",
  "verdict.paired": "paired",
  "verdict.undecided": "undecided",
  "verdict.not-dipolar": "not dipolar",
  "verdict.edge": "edge",
  "verdict.below-the-brain": "below the brain",
  "verdict.lone-electrode": "lone electrode",
  "verdict.none": "without a verdict",

  region: "Region",
  "region.repeats": "Repeats of this map",
  "region.numbers": "Numbers of the region",
  "region.legend": "Drawn in the views",
  "region.cloud": "refitted under drawn errors",
  "region.errors": "95 % of these",
  "region.noise": "if the residual were independent noise",
  "region.points": "repeats of this map",
  "region.causes": "What each cause alone would do",
  "region.cause": "Cause",
  "region.size": "Size",
  "region.sd": "Shift of the position per axis (root mean square), mm",

  alternatives: "Other explanations",
  "alternatives.hint": "One dipole elsewhere, a mirrored pair, two free dipoles: each held against single dipoles seen through heads that are not quite as modelled.",
  "alternatives.go": "Look for other explanations",
  "alternatives.busy": "Looking for other explanations",
  "alternatives.kind": "Explanation",
  "alternatives.rv": "RV, %",
  "alternatives.adjusted": "Adjusted RV, %",
  "alternatives.parameters": "Parameters",
  "alternatives.distance": "Apart, mm",
  "alternatives.f": "F",
  "alternatives.bic": "BIC, difference",
  "alternatives.share": "Of simulated single dipoles, %",
  "alternatives.decision": "Decision",
  "alternatives.reference": "for comparison",
  "alternatives.preferred": "preferred",
  "alternatives.not-decidable": "not decidable",
  "alternatives.worse": "no better",
  "alternatives.refused": "refused",
  "alternatives.none": "none",
  "alternatives.second-minimum": "one dipole, elsewhere",
  "alternatives.mirrored-pair": "mirrored pair",
  "alternatives.two-dipoles": "two free dipoles",

  influence: "What carries the fit",
  "influence.figure": "Shift of the position without each electrode",
  "influence.area": "Area of a circle: shift of the position without that electrode. Named are those that carry the fit.",
  "influence.electrode": "Left out",
  "influence.shift": "Shift, mm",
  "influence.rv": "RV without it, %",
  "influence.all": "All electrodes",
  "influence.few": "Only the farthest",

  "told.soon": "This follows in a moment.",

  "what-if": "What would move it",
  "what-if.change": "If",
  "what-if.shift": "Shift, mm",
  "what-if.depth": "Deeper by, mm",
  "what-if.rv": "RV, %",

  slices: "Residual variance over the brain, and the dipole moved by hand",
  "slices.one": "Slice through the brain",
  "slices.scale": "RV of the best dipole at each place.",
  "slices.hint": "Point at a place to read its residual variance and the best direction there.",
  "slices.how": "Drag the dipole, or use the arrow keys and Page Up and Down (5 mm, with Shift 1 mm): slices and maps follow. Escape returns to the best fit.",
  "hand.moved": "by hand",
  "hand.projected": "one dipole, by hand",
  "hand.mark": "dipole by hand",
  "hand.not-best": "Moved by hand: this is not the best fit.",
  "hand.kept": "Kept for looking: this is not the best fit.",
  "hand.keep": "Keep for looking",
  "hand.back": "Return to the best fit",
  "hand.shown": "Maps and views show the dipole moved by hand, which is not the best fit. Sentence, verdict, numbers and report are those of the best fit.",
  "hand.values": "(values of the best fit)",

  populations: "Reference populations",
  "populations.none": "None are drawn yet.",
  "populations.curves": "Share of simulated maps with RV at most x, in %",
  "populations.density": "Simulated maps by eccentricity and RV",
  "populations.density-words": "The darker (on dark paper: lighter), the more of the simulated maps; the ring is this map. Draws whose fit ends at the boundary lie at the right end.",
  "populations.here": "this map",
  "populations.eccentricity": "eccentricity",
  "populations.rv": "RV, %",
  "populations.kind": "Sources",
  "populations.draws": "Maps",
  "populations.median": "Median RV, %",
  "populations.range": "5–95 % of them, RV in %",
  "populations.lower": "Lower RV than this map, %",
  "populations.lower-here": "Lower at this depth, %",
  "populations.boundary": "At the boundary, %",
  "populations.kind.noise": "noise",
  "populations.kind.one-dipole": "one dipole",
  "populations.kind.two-dipoles": "two dipoles",
  "populations.kind.five-dipoles": "five dipoles",
  "populations.kind.twenty-dipoles": "twenty dipoles",
  "populations.kind.hundred-dipoles": "hundred dipoles",
  "shares.behind": "beside reference populations",

  "trust.settings": "What this rests on, to be changed",
  "trust.defaults": "Back to defaults",
  "trust.errors": "Errors of the fit",
  "trust.noise": "Noise, in the maps’ unit; without it, that of the residual",
  "trust.sources": "Sources of reference populations",
  "trust.limits": "Limits of the verdict",
  "trust.pair": "two numbers",
  "trust.rising": "two numbers, the smaller one first",
  "trust.trials": "A single trial’s standard deviation counts together with the number of trials only.",
  "set.errors.electrodesMm": "Electrodes misplaced, mm",
  "set.errors.skullRatio": "Brain-to-skull ratio, from and to; 0 for that of the head",
  "set.errors.sphere": "Sphere off, times the standard error of its fit",
  "set.errors.backgroundSources": "Weak background sources; 0 for independent noise",
  "set.errors.draws": "Refits",
  "set.errors.seed": "Seed of the refits",
  "set.noise.sd": "Standard deviation at an electrode",
  "set.noise.singleTrialSd": "or that of a single trial",
  "set.noise.trials": "and the number of trials",
  "set.sources.draws": "Maps of each population",
  "set.sources.seed": "Seed of the populations",
  "set.sources.maxEccentricity": "Largest eccentricity",
  "set.sources.floor": "Lowest z in brain radii, and its rise to the front",
  "set.sources.orientation": "Orientation",
  "set.sources.noise": "Noise of the single dipoles, share of power",
  "set.limits.oneDipole": "Dipolar: RV within this share of single dipoles",
  "set.limits.ruledOut": "Not dipolar: RV beyond this share of single dipoles",
  "set.limits.others": "Dipolar: as low in at most this share of two and of hundred",
  "set.limits.loneElectrode": "Lone electrode: share of the power at one channel",
  "set.limits.coverageDeg": "Outside coverage: degrees to the nearest electrode",
  "orientation.isotropic": "in any direction",
  "orientation.radial": "radial",
  "orientation.tangential": "tangential",
};

/** @param {Populations} populations @param {number | null} left seconds */
export function drawnText({ done, total }, left) {
  const text = `${done.toLocaleString("en-GB")} of ${total.toLocaleString("en-GB")} reference maps drawn`;
  return left === null ? text : `${text}, ${leftText(left)} left`;
}

/** What a report is without for now. @param {{ regions: number | null, populations: boolean }} lacks `regions`: the most maps that have them */
export function reportLacksText({ regions, populations }) {
  const lines = [
    populations ? "The report has reference populations and verdicts once all reference maps are drawn." : "",
    regions === null ? "" : `It has regions and electrodes to check for tables of up to ${regions.toLocaleString("en-GB")} maps only; this one has more.`,
  ];
  return lines.filter((line) => line !== "").join(" ").replace(/^It has/, "The report has");
}

/** This map in a figure of populations. @param {number} rv */
export function thisMapText(rv) {
  return `${TRUST_WORDS["populations.here"]}: RV ${percentText(rv)}`;
}

/** The first letter as at the beginning of a sentence. @param {string} text */
export function beginning(text) {
  return typeset(`${text.slice(0, 1).toUpperCase()}${text.slice(1)}`);
}

/** What a field takes, and what holds without an entry. @param {[number, number]} limits @param {string} standard */
export function fieldText([least, most], standard) {
  const range = most > 1e12 ? "above 0" : `${enteredText(least)} to ${most.toLocaleString("en-GB")}`;
  return typeset(standard === "" ? range : `${range}; ${standard} unless changed`).replaceAll(" to ", `${NO_BREAK}to${NO_BREAK}`);
}

/** A verdict's word, and the rest of its sentence, which begins with it. @param {{ word: VerdictWord, text: string }} verdict */
export function verdictParts({ word, text }) {
  const { length } = TRUST_WORDS[`verdict.${word}`];
  return [text.slice(0, length), text.slice(length)];
}

/** @param {string} label of an electrode */
export function leaveOutText(label) {
  return `Leave out ${label}`;
}

/** Of an entry that was not taken, by the words beside its field. @param {string} label @param {string} hint */
export function notTakenText(label, hint) {
  return `“${label}” was not taken: ${hint}.`;
}
