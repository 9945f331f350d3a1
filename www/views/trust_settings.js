/** What regions, reference populations and verdicts rest on, to be changed in place. */

import { enteredNumber, enteredText } from "../text/figures.js";
import { fieldText } from "../text/trust.js";
import { word } from "../text/words.js";
import { make, need } from "./element.js";
import { keepTyped, settingId } from "./setting.js";

/** @import { Session } from "../session/session.js" */

/**
 * A setting with the limits of its numbers and what holds without an entry; `pair` takes two of them.
 * @typedef {{ path: string[], limits: [number, number], standard: string, pair?: boolean }} TrustField
 */

/** @type {TrustField[]} */
const TRUST_FIELDS = [
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

/** What an entry means; undefined for what is outside of the limits. @param {TrustField} field @param {string} text */
function enteredSetting({ path, limits: [least, most], pair }, text) {
  const numbers = pair === true ? text.split(/[;\s]+|,\s+/).filter((part) => part !== "").map(enteredNumber) : [enteredNumber(text)];
  if (path[1] === "skullRatio" && numbers.every((one) => one === 0)) return null;
  const counted = COUNTED.includes(path[1]);
  if (!numbers.every((one) => one >= least && one <= most && (!counted || Number.isInteger(one)))) return undefined;
  if (pair !== true) return numbers[0];
  const rising = path[1] !== "skullRatio" || numbers[0] <= numbers[1];
  return numbers.length === 2 && rising ? numbers : undefined;
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

  /** Noise is one number, or two that belong together. @param {string} key @param {unknown} value */
  function setNoise(key, value) {
    const entries = ["sd", "singleTrialSd", "trials"].map((one) => /** @type {[string, unknown]} */ ([
      one,
      one === key ? value : enteredNumber(need(settingId(["noise", one]), HTMLInputElement).value),
    ]));
    const noise = Object.fromEntries(entries.filter(([, one]) => Number.isFinite(one)));
    if (key === "sd" && value !== undefined) session.set({ noise: /** @type {any} */ ({ sd: value }) });
    else if (noise.singleTrialSd !== undefined && noise.trials !== undefined) {
      session.set({ noise: /** @type {any} */ ({ singleTrialSd: noise.singleTrialSd, trials: noise.trials }) });
    } else if (value === undefined) session.set({ noise: undefined });
  }

  /** @param {TrustField} field */
  function fieldElement(field) {
    const { path, limits, standard } = field;
    const row = make("div", "", { class: "setting-row" });
    const id = settingId(path);
    const attributes = { type: "text", inputmode: "decimal", autocomplete: "off", id, "aria-describedby": `${id}-hint` };
    const input = /** @type {HTMLInputElement} */ (make("input", "", { ...attributes, value: heldText(session.read().settings, path) }));
    input.addEventListener("change", () => {
      const empty = input.value.trim() === "";
      const value = empty ? undefined : enteredSetting(field, input.value.trim());
      const good = empty || value !== undefined;
      input.setAttribute("aria-invalid", String(!good));
      fault.textContent = good ? "" : word("trust.invalid");
      if (!good) return;
      if (path[0] === "noise") setNoise(path[1], value);
      else session.setAt(path, value);
    });
    row.append(
      make("label", word(`set.${path.join(".")}`), { for: id }),
      input,
      make("span", fieldText(limits, standard), { class: "small", id: `${id}-hint` }),
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

  const write = () =>
    keepTyped(body, () => {
      body.replaceChildren(...["errors", "noise", "sources", "limits"].map((group) => {
        const part = make("fieldset", "");
        part.append(make("legend", word(`trust.${group}`)));
        part.append(...TRUST_FIELDS.filter(({ path }) => path[0] === group).map(fieldElement));
        if (group === "sources") part.append(orientationElement());
        return part;
      }));
    });
  need("trust-defaults", HTMLButtonElement).addEventListener("click", () => {
    fault.textContent = "";
    session.set({ errors: undefined, noise: undefined, sources: undefined, limits: undefined });
    write();
  });
  write();
  // One after the other: the fields follow whatever changes them.
  session.watch(({ settings: { errors, noise, sources, limits } }) => JSON.stringify([errors, noise, sources, limits]), write);
}
