/** One setting to be changed in place: a sentence with a list of what else it can be, or a field. */

import { isTextField } from "../intake/drop.js";
import { enteredNumber } from "../text/figures.js";
import { word } from "../text/words.js";
import { make } from "./element.js";

/**
 * Puts a value in its place; undefined leaves it to the engine.
 * @typedef {(path: string[], value: unknown) => void} Apply
 */

/** @param {string[]} path */
function settingId(path) {
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
  const field = /** @type {HTMLInputElement} */ (make("input", "", { type: "text", autocomplete: "off" }));
  field.value = held;
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
 * @param {[string, string]} keys
 * @param {Record<string, any>} held
 * @param {Record<string, unknown>} beside further parts of the setting
 */
export function pairRow(apply, setting, keys, held, beside) {
  const row = make("fieldset", "", { class: "setting-row pair" });
  row.append(make("legend", word(`understood.${setting}`)));
  const fields = keys.map((key) => {
    const field = /** @type {HTMLInputElement} */ (
      make("input", "", { type: "text", inputmode: "decimal", autocomplete: "off", id: settingId([setting, key]) })
    );
    field.value = String(held[key] ?? "");
    const label = make("label", word(`understood.${key}`));
    label.append(field);
    row.append(label);
    return field;
  });
  row.addEventListener("change", (event) => {
    if (!isTextField(event.target)) return;
    const numbers = fields.map((field) => enteredNumber(field.value));
    const empty = fields.every((field) => field.value.trim() === "");
    fields.forEach((field, at) => {
      field.setAttribute("aria-invalid", String(field.value.trim() !== "" && !Number.isFinite(numbers[at])));
    });
    if (empty) apply([setting], undefined);
    else if (numbers.every(Number.isFinite)) {
      apply([setting], { ...beside, [keys[0]]: numbers[0], [keys[1]]: numbers[1] });
    }
  });
  return row;
}
