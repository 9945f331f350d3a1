/** One setting to be changed in place: a sentence with a list of what else it can be, or a field. */

import { isTextField } from "../intake/drop.js";
import { enteredNumber } from "../text/figures.js";
import { timesText, word } from "../text/words.js";
import { make, need } from "./element.js";

/**
 * Puts a value in its place; undefined leaves it to the engine.
 * @typedef {(path: string[], value: unknown) => void} Apply
 */

/** @param {string[]} path */
export function settingId(path) {
  return `set-${path.join("-").replace(/[^\w-]/g, (letter) => `_${letter.codePointAt(0)}`)}`;
}

/** @param {string[]} path @param {string} text @param {HTMLElement} control @returns {HTMLElement} */
function settingRow(path, text, control) {
  const row = make("div", "", { class: "setting-row", "data-setting": path.at(-1) ?? "" });
  control.id = settingId(path);
  row.append(make("label", text, { for: control.id }), control);
  return row;
}

/**
 * A list whose first entry leaves the setting to the engine.
 * @param {Apply} apply
 * @param {{ path: string[], options: ChoiceOption[], value?: ChoiceValue, from?: string }} choice
 * @param {string} text
 */
export function choiceRow(apply, { path, options, value, from }, text) {
  const list = /** @type {HTMLSelectElement} */ (make("select", ""));
  const now = options.findIndex((option) => option.value === value);
  list.append(make("option", word("automatic"), { value: "" }));
  options.forEach(({ label }, at) => list.append(make("option", label, { value: String(at) })));
  list.value = from === "setting" && now >= 0 ? String(now) : "";
  list.addEventListener("change", () => {
    apply(path, list.value === "" ? undefined : options[Number(list.value)].value);
  });
  return settingRow(path, text, list);
}

/**
 * A text field; what cannot be read is marked and not taken.
 * @param {Apply} apply
 * @param {string[]} path
 * @param {string} text
 * @param {string} held
 * @param {(entered: string) => unknown} read undefined for what cannot be read
 */
export function fieldRow(apply, path, text, held, read) {
  const field = /** @type {HTMLInputElement} */ (make("input", "", { type: "text", autocomplete: "off", value: held }));
  field.addEventListener("change", () => {
    const entered = field.value.trim();
    const value = entered === "" ? undefined : read(entered);
    const good = entered === "" || value !== undefined;
    field.setAttribute("aria-invalid", String(!good));
    if (good) apply(path, value);
  });
  return settingRow(path, text, field);
}

/** A column by its number or its name. @param {string} entered */
export function enteredColumn(entered) {
  return /^\d+$/.test(entered) ? Number(entered) : entered;
}

/** @param {string} entered */
export function enteredList(entered) {
  const parts = entered.split(/[,;]/).map((part) => part.trim());
  return parts.filter((part) => part !== "");
}

/**
 * Two numbers that are only meant together.
 * @param {Apply} apply
 * @param {string} setting
 * @param {string} legend
 * @param {[string, string]} keys
 * @param {Record<string, any>} held
 * @param {HTMLElement} unit of both; chosen, where it is a list
 */
function pairRow(apply, setting, legend, keys, held, unit) {
  const row = make("fieldset", "", { class: "setting-row pair" });
  row.append(make("legend", legend));
  const fields = keys.map((key) => {
    const value = String(held[key] ?? "");
    const attributes = { type: "text", inputmode: "decimal", autocomplete: "off", id: settingId([setting, key]), value };
    const field = /** @type {HTMLInputElement} */ (make("input", "", attributes));
    const label = make("label", word(`understood.${key}`));
    label.append(field);
    row.append(label);
    return field;
  });
  row.append(unit);
  row.addEventListener("change", () => {
    const numbers = fields.map((field) => enteredNumber(field.value));
    const empty = fields.every((field) => field.value.trim() === "");
    fields.forEach((field, at) => {
      field.setAttribute("aria-invalid", String(field.value.trim() !== "" && !Number.isFinite(numbers[at])));
    });
    const beside = unit instanceof HTMLSelectElement ? { unit: unit.value } : {};
    if (empty) apply([setting], undefined);
    else if (numbers.every(Number.isFinite)) {
      apply([setting], { ...beside, [keys[0]]: numbers[0], [keys[1]]: numbers[1] });
    }
  });
  return row;
}

/**
 * When the maps were, and the baseline as soon as that is known.
 * @param {Apply} apply
 * @param {PageSettings} settings
 * @param {Understood["times"]} times
 */
export function timeRows(apply, settings, times) {
  const unit = settings.times?.unit ?? times?.unit ?? "ms";
  const units = /** @type {HTMLSelectElement} */ (
    make("select", "", { id: settingId(["times", "unit"]), "aria-label": word("understood.unit") })
  );
  units.append(...["ms", "s"].map((one) => make("option", one)));
  units.value = unit;
  const rows = [pairRow(apply, "times", timesText(times), ["start", "step"], settings.times ?? {}, units)];
  if (times !== null) {
    const baseline = settings.baseline ?? {};
    rows.push(pairRow(apply, "baseline", word("understood.baseline"), ["from", "to"], baseline, make("span", unit)));
  }
  return rows;
}

/**
 * Writes a part of the page anew. What was typed there and not taken yet stays, as does the focus.
 * @param {HTMLElement} part
 * @param {() => void} write
 */
export function keepTyped(part, write) {
  const focused = document.activeElement;
  const inside = focused !== null && part.contains(focused);
  /** @type {HTMLInputElement[]} */
  const fields = [...part.querySelectorAll(`input[type="text"]`)].map((field) => /** @type {any} */ (field));
  write();
  for (const field of fields) {
    const now = document.getElementById(field.id);
    if (!(now instanceof HTMLInputElement) || now === field) continue;
    if (now.defaultValue === field.defaultValue && field.value !== field.defaultValue) {
      now.value = field.value;
      if (field.ariaInvalid !== null) now.ariaInvalid = field.ariaInvalid;
    }
    if (field === focused) now.setSelectionRange(field.selectionStart, field.selectionEnd);
  }
  if (inside) (document.getElementById(focused.id) ?? need("main", HTMLElement)).focus({ preventScroll: true });
}
