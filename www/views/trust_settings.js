/** What regions, reference populations and verdicts rest on, to be changed in place. */

import { enteredNumber, enteredText } from "../text/figures.js";
import { fieldText, notTakenText } from "../text/trust.js";
import { word } from "../text/words.js";
import { make, need } from "./element.js";
import { keepTyped, settingId } from "./setting.js";

/** @import { Session } from "../session/session.js" */

/**
 * A setting with the limits of its numbers and what holds without an entry; `pair` takes two of them.
 * @typedef {{ path: string[], limits: [number, number], standard: string, pair?: boolean }} TrustField
 */

/** @type {TrustField[]} */
export const TRUST_FIELDS = [
  { path: ["errors", "electrodesMm"], limits: [0, 30], standard: "5" },
  { path: ["errors", "skullRatio"], limits: [1, 1000], standard: "15, 40", pair: true },
  { path: ["errors", "sphere"], limits: [0, 10], standard: "1" },
  { path: ["errors", "backgroundSources"], limits: [0, 1000], standard: "30" },
  { path: ["errors", "draws"], limits: [200, 5000], standard: "200" },
  { path: ["errors", "seed"], limits: [0, 2 ** 32 - 1], standard: "1" },
  { path: ["noise", "sd"], limits: [1e-100, 1e100], standard: "" },
  { path: ["noise", "singleTrialSd"], limits: [1e-100, 1e100], standard: "" },
  { path: ["noise", "trials"], limits: [1, 1e9], standard: "" },
  { path: ["sources", "draws"], limits: [1000, 100000], standard: "10,000" },
  { path: ["sources", "seed"], limits: [0, 2 ** 32 - 1], standard: "1" },
  { path: ["sources", "maxEccentricity"], limits: [0.1, 0.98], standard: "0.9" },
  { path: ["sources", "floor"], limits: [-2, 1], standard: "-0.5, 0.25", pair: true },
  { path: ["sources", "noise"], limits: [0, 0.5], standard: "0.01" },
  { path: ["limits", "oneDipole"], limits: [0.5, 1], standard: "0.95" },
  { path: ["limits", "ruledOut"], limits: [0.5, 1], standard: "0.999" },
  { path: ["limits", "others"], limits: [0, 0.5], standard: "0.05" },
  { path: ["limits", "loneElectrode"], limits: [0.1, 1], standard: "0.5" },
  { path: ["limits", "coverageDeg"], limits: [1, 180], standard: "" },
];
/** Whole numbers. */
const COUNTED = ["draws", "seed", "trials", "backgroundSources"];
const ORIENTATIONS = ["isotropic", "radial", "tangential"];

/** The field of a setting. @param {string[]} path @returns {TrustField} */
function fieldOf([group, key]) {
  return /** @type {TrustField} */ (TRUST_FIELDS.find(({ path }) => path[0] === group && path[1] === key));
}

/** Two numbers. A comma without a blank is a decimal one unless nothing else stands between them. @param {string} text */
function pairParts(text) {
  const parts = text.split(/[;\s]+|,\s+/).filter((part) => part !== "");
  return parts.length === 1 ? parts[0].split(",") : parts;
}

/**
 * What an entry means; undefined for what is outside of the limits.
 * @param {TrustField} field
 * @param {string} text
 * @returns {number | (number | undefined)[] | null | undefined}
 */
export function withinLimits({ path, limits: [least, most], pair }, text) {
  const counted = COUNTED.includes(path[1]);
  // A count has no decimals: a comma before three digits parts its thousands.
  const numbers = counted ? [Number(text.replace(/(?<=\d),(?=\d{3}(,|$))/g, ""))] : (pair === true ? pairParts(text) : [text]).map(enteredNumber);
  if (path[1] === "skullRatio" && numbers.every((one) => one === 0)) return null;
  if (!numbers.every((one) => one >= least && one <= most && (!counted || Number.isInteger(one)))) return undefined;
  if (pair !== true) return numbers[0];
  const rising = path[1] !== "skullRatio" || numbers[0] <= numbers[1];
  return numbers.length === 2 && rising ? numbers : undefined;
}

/**
 * Whether settings that limit each other fit together, as the engine wants them.
 * @param {string[]} path
 * @param {unknown} value undefined for what holds without an entry
 * @param {Pick<PageSettings, "sources" | "limits">} settings
 */
function fitsOthers([group, key], value, settings) {
  /** @param {string[]} path @returns {any} */
  const held = (path) => {
    const entered = path[0] === group && path[1] === key ? value : /** @type {any} */ (settings)[path[0]]?.[path[1]];
    return entered ?? withinLimits(fieldOf(path), fieldOf(path).standard);
  };
  if (group === "limits") return held(["limits", "oneDipole"]) <= held(["limits", "ruledOut"]);
  if (group !== "sources") return true;
  const [height, slope] = held(["sources", "floor"]);
  // The engine wants the floor no farther above the centre than half the radius of the ball of sources.
  return Math.abs(slope) <= 1 && height <= 0.5 * held(["sources", "maxEccentricity"]) * Math.hypot(1, slope);
}

/**
 * What an entry means, nothing for an empty one, and whether it can be taken beside the other settings.
 * @param {string[]} path
 * @param {string} text
 * @param {Pick<PageSettings, "sources" | "limits">} settings
 */
export function enteredSetting(path, text, settings) {
  const empty = text.trim() === "";
  const value = empty ? undefined : withinLimits(fieldOf(path), text.trim());
  return { value, good: (empty || value !== undefined) && fitsOthers(path, value, settings) };
}

/**
 * Noise after a change of one of its fields: one number, or two that belong together. What cannot be taken alone changes nothing.
 * @param {PageSettings["noise"]} held
 * @param {Record<string, number | undefined>} entered all fields, as they are now
 * @param {string} key of the one that was changed
 */
export function changedNoise(held, { sd, singleTrialSd, trials }, key) {
  if (key === "sd" && sd !== undefined) return { sd };
  if (singleTrialSd !== undefined && trials !== undefined) return { singleTrialSd, trials };
  const emptied = held !== undefined && held !== null && key in held && { sd, singleTrialSd, trials }[key] === undefined;
  return emptied ? undefined : held;
}

/** What a field takes. @param {TrustField} field */
function hintOf({ path, limits, standard, pair }) {
  const taken = fieldText(limits, standard);
  return pair === true ? `${word(path[1] === "skullRatio" ? "trust.rising" : "trust.pair")}, ${taken}` : taken;
}

/** A setting as it is written into its field. @param {PageSettings} settings @param {string[]} path */
function heldText(settings, [group, key]) {
  const held = /** @type {any} */ (settings)[group]?.[key];
  if (held === undefined) return "";
  if (held === null) return "0";
  return Array.isArray(held) ? held.map(enteredText).join(", ") : enteredText(held);
}

/** @param {Session} session */
export function showTrustSettings(session) {
  const body = need("trust-fields", HTMLElement);
  const fault = need("trust-fault", HTMLElement);

  /** @param {string} key */
  function setNoise(key) {
    const { settings } = session.read();
    /** @param {string} one */
    const entry = (one) => [one, enteredSetting(["noise", one], need(settingId(["noise", one]), HTMLInputElement).value, settings).value];
    const noise = changedNoise(settings.noise, Object.fromEntries(["sd", "singleTrialSd", "trials"].map(entry)), key);
    if (noise !== settings.noise) session.set({ noise: /** @type {any} */ (noise) });
  }

  /** What was entered and does not count, field by field. */
  function tellFaults() {
    const refused = TRUST_FIELDS.filter(({ path }) => need(settingId(path), HTMLInputElement).getAttribute("aria-invalid") === "true");
    const told = refused.map((field) => notTakenText(word(`set.${field.path.join(".")}`), hintOf(field)));
    const [single, trials] = ["singleTrialSd", "trials"].map((key) => need(settingId(["noise", key]), HTMLInputElement).value.trim() !== "");
    if (single !== trials) told.push(word("trust.trials"));
    fault.textContent = told.join(" ");
  }

  /** @param {TrustField} field */
  function fieldElement(field) {
    const { path } = field;
    const row = make("div", "", { class: "setting-row" });
    const id = settingId(path);
    const attributes = { type: "text", inputmode: "decimal", autocomplete: "off", id, "aria-describedby": `${id}-hint` };
    const input = /** @type {HTMLInputElement} */ (make("input", "", { ...attributes, value: heldText(session.read().settings, path) }));
    input.addEventListener("change", () => {
      const { value, good } = enteredSetting(path, input.value, session.read().settings);
      input.setAttribute("aria-invalid", String(!good));
      tellFaults();
      if (!good) return;
      if (path[0] === "noise") setNoise(path[1]);
      else session.setAt(path, value);
    });
    row.append(
      make("label", word(`set.${path.join(".")}`), { for: id }),
      input,
      make("span", hintOf(field), { class: "small", id: `${id}-hint` }),
    );
    return row;
  }

  function orientationElement() {
    const row = make("div", "", { class: "setting-row" });
    const id = settingId(["sources", "orientation"]);
    const list = /** @type {HTMLSelectElement} */ (make("select", "", { id }));
    list.append(...ORIENTATIONS.map((one) => make("option", word(`orientation.${one}`), { value: one })));
    list.value = session.read().settings.sources?.orientation ?? ORIENTATIONS[0];
    list.addEventListener("change", () => {
      session.setAt(["sources", "orientation"], list.value === ORIENTATIONS[0] ? undefined : list.value);
    });
    row.append(make("label", word("set.sources.orientation"), { for: id }), list);
    return row;
  }

  function write() {
    body.replaceChildren(...["errors", "noise", "sources", "limits"].map((group) => {
      const part = make("fieldset", "");
      part.append(make("legend", word(`trust.${group}`)));
      part.append(...TRUST_FIELDS.filter(({ path }) => path[0] === group).map(fieldElement));
      if (group === "sources") part.append(orientationElement());
      return part;
    }));
  }
  need("trust-defaults", HTMLButtonElement).addEventListener("click", () => {
    fault.textContent = "";
    const { errors, noise, sources, limits } = session.read().settings;
    const own = [errors, noise, sources, limits].some((one) => one !== undefined && one !== null);
    if (own) session.set({ errors: undefined, noise: undefined, sources: undefined, limits: undefined });
    // What was refused goes too.
    write();
  });
  write();
  // One after the other: the fields follow whatever changes them.
  session.watch(({ settings: { errors, noise, sources, limits } }) => JSON.stringify([errors, noise, sources, limits]), () => keepTyped(body, write));
}
