/** What went wrong: a sentence, a next step, and details to copy. */

import { copyText } from "../export/out.js";
import { helpFor, isMisfit } from "../session/help.js";
import { namedFiles } from "../session/inputs.js";
import { detailsText } from "../text/faults.js";
import { shortName, typeset } from "../text/figures.js";
import { keptText, subjectText, word } from "../text/words.js";
import { confirmOn } from "./confirm.js";
import { make, need } from "./element.js";
import { choiceRow, enteredColumn, fieldRow } from "./setting.js";

/** @import { Session } from "../session/session.js" */
/** @import { Apply } from "./setting.js" */

/** @param {SessionState} state */
function comesFromHead({ answer, changed }) {
  return answer !== null && changed.includes("head");
}

/** Settings that may make sense of what was not understood. @param {Session} session @param {Fault} failure */
function helpRows(session, failure) {
  const { inputs, settings, refused, offers } = session.read();
  const names = namedFiles(refused?.inputs ?? inputs).map(({ name }) => name);
  return helpFor(failure, names).map(({ setting, path, file }) => {
    const name = word(`set.${setting}`);
    const text = file === null ? name : `${name}: ${shortName(file)}`;
    /** @type {any} */
    const held = path.reduce((part, key) => /** @type {any} */ (part)?.[key], /** @type {any} */ (refused?.settings ?? settings));
    const offer = offers.find((one) => one.setting === setting);
    /** @type {Apply} */
    const apply = (place, chosen) => session.tryAt(place, chosen);
    const value = held === undefined ? {} : { value: held, from: "setting" };
    const row =
      offer === undefined
        ? fieldRow(apply, path, text, String(held ?? ""), enteredColumn)
        : choiceRow(apply, { path, options: offer.options, ...value }, text);
    // The same setting may stand among what was understood for the answer that is still shown.
    for (const part of row.querySelectorAll("[id], [for]")) {
      for (const name of ["id", "for"]) {
        if (part.hasAttribute(name)) part.setAttribute(name, `help-${part.getAttribute(name)}`);
      }
    }
    return row;
  });
}

/**
 * Where a failure is said: what comes from the head or from a card, beside the setting that brought it about.
 * @param {SessionState} state
 * @param {Element | null} row of the cards that was changed last
 */
function placeOf(state, row) {
  const { failure, refused, changed } = state;
  if (failure !== null && comesFromHead(state)) return need("head-failure", HTMLElement);
  const fromCard = failure !== null && refused === null && changed.length > 0 && !changed.includes("exclude");
  return fromCard && row?.isConnected ? row : need("failure-place", HTMLElement);
}

/** Whether someone types, or works where the failure is said too. @param {Element | null} element */
function underHands(element) {
  return element !== null && element.matches("textarea, #electrode-list *, .disc, .head-edit *");
}

/** @param {Session} session */
export function showFailure(session) {
  const panel = need("failure", HTMLElement);
  const details = need("failure-details", HTMLElement);
  const copy = need("copy-details", HTMLButtonElement);
  copy.addEventListener("click", async () => confirmOn(copy, await copyText(details.textContent ?? "")));
  const restore = need("failure-restore", HTMLButtonElement);
  restore.addEventListener("click", () => {
    const near = panel.closest("details")?.querySelector("summary") ?? need("main", HTMLElement);
    session.restore();
    near.focus({ preventScroll: true });
  });
  need("failure-dismiss", HTMLButtonElement).addEventListener("click", () => {
    session.dismiss();
    need("main", HTMLElement).focus();
  });

  /** @type {Element | null} */
  let row = null;
  document.addEventListener(
    "change",
    ({ target }) => {
      row = target instanceof Element ? target.closest(".card .setting-row") : null;
    },
    true,
  );
  /** What had the focus when the panel was put away. */
  let tried = "";
  session.watch(
    (state) => state.failure,
    (failure, state) => {
      const help = need("failure-help", HTMLElement);
      // Who tries one setting after the other goes on where they were, and is not left nowhere in between.
      if (panel.contains(document.activeElement)) {
        tried = help.contains(document.activeElement) ? (document.activeElement?.id ?? "") : "";
        need("main", HTMLElement).focus({ preventScroll: true });
      }
      panel.hidden = failure === null;
      const place = placeOf(state, row);
      if (place === row) row.after(panel);
      else if (panel.parentElement !== place) place.append(panel);
      const { answer } = state;
      const others = answer !== null && state.inputs !== answer.inputs;
      restore.hidden = answer === null || (!others && state.settings === answer.settings);
      restore.textContent = word(others ? "failure.restore-input" : "failure.restore");
      const rows = failure === null || place === row ? [] : helpRows(session, failure);
      help.hidden = rows.length === 0;
      need("failure-rows", HTMLElement).replaceChildren(...rows);
      if (failure !== null) {
        if (document.activeElement?.id === "main") document.getElementById(tried)?.focus({ preventScroll: true });
        tried = "";
      }
      need("failure-message", HTMLElement).textContent = typeset(failure?.message ?? "");
      need("failure-hint", HTMLElement).textContent = failure?.hint ?? "";
      const kept = need("failure-kept", HTMLElement);
      kept.hidden = state.answer === null;
      const other = state.refused !== null && isMisfit(failure) ? ` ${word("failure.other")}` : "";
      kept.textContent = state.answer === null ? "" : keptText(subjectText(state.answer)) + other;
      if (failure !== null && !underHands(document.activeElement)) panel.scrollIntoView({ block: "nearest" });
      details.textContent = failure === null ? "" : detailsText(failure, state.program);
    },
  );
}
