/** The input column: two tables and the unit of the map. It folds to a few lines when it has done its work. */

import { inputOfFile, shownText } from "../intake/files.js";
import { ownFormat } from "../session/work.js";
import { shortName } from "../text/figures.js";
import { roleText, word } from "../text/words.js";
import { make, need } from "./element.js";

/** @import { Session } from "../session/session.js" */

/** Typing is over after this long. */
const TYPING_PAUSE_MS = 350;

/** @type {Record<InputKind, InputKind>} */
const OTHER_KIND = { maps: "electrodes", electrodes: "maps" };

/** @param {Input | null} input @param {InputKind} kind */
function inputName(input, kind) {
  if (input === null) return word(kind === "maps" ? "slot.none" : "slot.standard");
  return shortName(input.name) || word("slot.pasted");
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

  /** What was put here last, by number: an earlier one that is recognised later gives way. */
  let latest = 0;

  /**
   * Takes what was put here by hand, and says so if it reads like the other kind.
   * @param {Input | null} input
   * @param {(input: Input | null) => void} put
   */
  const take = async (input, put) => {
    if (input !== null && ownFormat(input.content) !== null) return session.add([input]);
    const number = ++latest;
    const known = input === null ? null : await session.recognised(input);
    if (number !== latest) return;
    put(known);
    const other = kind === "maps" ? ["electrodes", "labels"] : ["maps", "electrodes-and-maps"];
    misplaced.hidden = known?.role === undefined || !other.includes(known.role);
  };
  const takeField = () => {
    clearTimeout(timer);
    const typed = field.value.trim() === "" ? null : { name: "", content: field.value };
    take(typed, (input) => {
      own = input;
      session.edit(kind, input);
    }).catch(session.fail);
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
      await take(input, (known) => session.put({ [kind]: known }));
    } catch (error) {
      session.fail(error);
    }
  });
  clear.addEventListener("click", () => {
    latest++;
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
        field.placeholder = text === null ? word("slot.unshown") : "";
      }
      clear.hidden = input === null;
      need(`${kind}-name`, HTMLElement).textContent = shortName(input?.name ?? "");
      misplaced.hidden = true;
    },
  );
}

/** What is loaded, for the folded column. @param {Session} session */
function showLoaded(session) {
  session.watch(
    (state) => state.inputs,
    ({ maps, electrodes }) => {
      const beside = electrodes === null && maps?.role === "electrodes-and-maps";
      need("maps-loaded", HTMLElement).textContent = inputName(maps, "maps");
      need("electrodes-loaded", HTMLElement).textContent = beside ? word("slot.beside") : inputName(electrodes, "electrodes");
    },
  );
}

/** Files that stand beside the boxes, and a button that takes any number of any kind. @param {Session} session */
function showOthers(session) {
  const list = need("others", HTMLUListElement);
  const files = need("any-files", HTMLInputElement);
  files.addEventListener("change", async () => {
    const picked = [...(files.files ?? [])];
    files.value = "";
    try {
      await session.add(picked.map(inputOfFile));
    } catch (error) {
      session.fail(error);
    }
  });
  session.watch(
    (state) => state.inputs.others,
    (others) => {
      list.hidden = others.length === 0;
      list.replaceChildren(
        ...others.map((input) => {
          const element = make("li", "");
          const name = shortName(input.name || word("slot.pasted"));
          const remove = make("button", word("remove"), { type: "button", class: "quiet" });
          remove.setAttribute("aria-label", `${word("remove")}: ${name}`);
          remove.addEventListener("click", () => {
            session.remove(input);
            files.focus();
          });
          const role = make("span", roleText(input.role ?? "unused"), { class: "small" });
          element.append(make("span", name, { class: "file-name" }), " · ", role, remove);
          return element;
        }),
      );
      need("others-loaded", HTMLElement).textContent = others.map(({ name }) => shortName(name)).join(", ");
      for (const part of document.querySelectorAll("#loaded .others")) part.toggleAttribute("hidden", others.length === 0);
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
    (failure, { changed, refused }) => {
      // What comes from a setting is mended where the setting is; after files were refused, the input is that of before.
      if (failure !== null && changed.length === 0 && refused === null) setFolded(false);
    },
  );
}

/** @param {Session} session */
export function showIntake(session) {
  showSlot(session, "maps");
  showSlot(session, "electrodes");
  showLoaded(session);
  showOthers(session);
  showUnit(session);
  showFolding(session);
}
