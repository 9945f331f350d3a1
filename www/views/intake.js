/** The input column: two tables and the unit of the map. It folds to a few lines when it has done its work. */

import { inputOfFile, shownText } from "../intake/files.js";
import { word } from "../text/words.js";
import { need } from "./element.js";

/** @import { Session } from "../session/session.js" */

/** Typing is over after this long. */
const TYPING_PAUSE_MS = 350;

/** @type {Record<InputKind, InputKind>} */
const OTHER_KIND = { maps: "electrodes", electrodes: "maps" };

/** @param {Input | null} input @param {InputKind} kind */
function inputName(input, kind) {
  if (input === null) return word(kind === "maps" ? "slot.none" : "slot.standard");
  return input.name || word("slot.pasted");
}

/** @param {Session} session @param {InputKind} kind */
function showSlot(session, kind) {
  const field = need(`${kind}-text`, HTMLTextAreaElement);
  const file = need(`${kind}-file`, HTMLInputElement);
  const clear = need(`${kind}-clear`, HTMLButtonElement);
  const misplaced = need(`${kind}-misplaced`, HTMLElement);
  /** What the field itself last gave, not to be written back into it while one types. @type {Input | null} */
  let own = null;
  let timer = 0;

  /**
   * Takes what was put here by hand, and says so if it reads like the other kind.
   * @param {Input | null} input
   * @param {() => void} put
   */
  const take = async (input, put) => {
    put();
    const read = input === null ? kind : await session.kindOf(input.content);
    if (session.read().inputs[kind] === input) misplaced.hidden = read === kind;
  };
  const takeField = () => {
    clearTimeout(timer);
    own = field.value.trim() === "" ? null : { name: "", content: field.value };
    take(own, () => session.edit(kind, own)).catch(session.fail);
  };
  field.addEventListener("input", () => {
    clearTimeout(timer);
    timer = setTimeout(takeField, TYPING_PAUSE_MS);
  });
  field.addEventListener("change", () => {
    const held = session.read().inputs[kind];
    if ((held === null ? "" : shownText(held)) !== field.value) takeField();
  });
  file.addEventListener("change", async () => {
    const picked = file.files?.[0];
    if (picked === undefined) return;
    // The same file can be picked again after it has changed.
    file.value = "";
    try {
      const input = await inputOfFile(picked);
      await take(input, () => session.put({ [kind]: input }));
    } catch (error) {
      session.fail(error);
    }
  });
  clear.addEventListener("click", () => {
    session.put({ [kind]: null });
    field.focus();
  });
  need(`${kind}-move`, HTMLButtonElement).addEventListener("click", () => {
    session.put({ [kind]: null, [OTHER_KIND[kind]]: session.read().inputs[kind] });
    need(`${OTHER_KIND[kind]}-text`, HTMLTextAreaElement).focus();
  });

  session.watch(
    (state) => state.inputs[kind],
    (input) => {
      if (input === null || input !== own) {
        const text = input === null ? "" : shownText(input);
        if (text === null || field.value.trim() !== text.trim()) field.value = text ?? "";
        field.placeholder = text === null ? word("slot.large") : "";
      }
      clear.hidden = input === null;
      need(`${kind}-name`, HTMLElement).textContent = input?.name ?? "";
      need(`${kind}-loaded`, HTMLElement).textContent = inputName(input, kind);
      misplaced.hidden = true;
    },
  );
}

/** @param {Session} session */
function showUnit(session) {
  const unit = need("unit", HTMLFieldSetElement);
  unit.addEventListener("change", (event) => {
    if (event.target instanceof HTMLInputElement) session.set({ mapUnit: /** @type {MapUnit} */ (event.target.value) });
  });
  session.watch(
    (state) => state.settings.mapUnit,
    (held) => {
      for (const choice of unit.querySelectorAll("input")) choice.checked = choice.value === held;
      need("unit-loaded", HTMLElement).textContent = word(`unit.${held}`);
    },
  );
}

/**
 * Folds the column when an answer has come, but never under the hands of someone who types; opens it when the input
 * has to be mended.
 * @param {Session} session
 */
function showFolding(session) {
  const intake = need("intake", HTMLElement);
  let typing = false;
  const sheet = need("sheet", HTMLElement);
  const fold = need("fold", HTMLButtonElement);

  /** @param {boolean} folded */
  const setFolded = (folded) => {
    sheet.toggleAttribute("data-folded", folded);
    need("intake-body", HTMLElement).hidden = folded;
    need("loaded", HTMLElement).hidden = !folded;
    fold.setAttribute("aria-expanded", String(!folded));
    fold.textContent = word(folded ? "intake.change" : "intake.fold");
  };
  fold.addEventListener("click", () => setFolded(!sheet.hasAttribute("data-folded")));
  intake.addEventListener("input", (event) => {
    typing = event instanceof InputEvent && event.inputType !== "insertFromPaste";
  });
  intake.addEventListener("focusout", () => {
    typing = false;
  });

  session.watch(
    (state) => state.answer?.key,
    (key) => {
      fold.hidden = key === undefined;
      if (key === undefined) setFolded(false);
      if (key === undefined || typing) return;
      const within = intake.contains(document.activeElement);
      setFolded(true);
      if (within) fold.focus();
    },
  );
  session.watch(
    (state) => state.failure,
    (failure, { changed }) => {
      // What comes from a setting is mended where the setting is.
      if (failure !== null && changed.length === 0) setFolded(false);
    },
  );
}

/** @param {Session} session */
export function showIntake(session) {
  showSlot(session, "maps");
  showSlot(session, "electrodes");
  showUnit(session);
  showFolding(session);
}
