/**
 * The head of the answer: its numbers, the published choices with their sources, and every part of it to edit. An
 * entry that is not complete is not sent; one that the engine refuses leaves the answer as it is.
 */

import { enteredNumber, enteredText, typeset } from "../text/figures.js";
import { shellLabel, word } from "../text/words.js";
import { make, need } from "./element.js";
import { writeRows } from "./rows.js";

/** @import { Session } from "../session/session.js" */

const EDITED = "edited";

/** @param {ShellSpec[]} left @param {ShellSpec[]} right */
function sameShells(left, right) {
  return (
    left.length === right.length &&
    left.every(({ tissue, ratio, conductivity }, at) => {
      const other = right[at];
      return tissue === other.tissue && ratio === other.ratio && conductivity === other.conductivity;
    })
  );
}

/** The catalogue's name for the shells, or that they are edited. @param {SessionState} state */
function choiceName({ settings, heads }) {
  const shells = settings.head?.shells;
  if (shells === undefined) return heads[0]?.name ?? "";
  return heads.find((choice) => sameShells(choice.shells, shells))?.name ?? EDITED;
}

/** A number of a field; the one it was filled from as long as its text is untouched. @param {HTMLInputElement} field */
function numberOf(field) {
  return field.value === field.dataset.text ? Number(field.dataset.exact) : enteredNumber(field.value);
}

/** @param {HTMLInputElement} field @param {number | undefined} value */
function fill(field, value) {
  const text = value === undefined ? "" : enteredText(value);
  field.value = text;
  field.dataset.text = text;
  field.dataset.exact = String(value);
  field.setAttribute("aria-invalid", "false");
}

/** @param {Session} session @param {Partial<PageHead>} parts those that are undefined become standard or fitted */
function changeHead(session, parts) {
  const head = { ...session.read().settings.head, ...parts };
  /** @type {PageHead} */
  const kept = {};
  if (head.shells !== undefined) kept.shells = head.shells;
  if (head.centre_mm !== undefined) kept.centre_mm = head.centre_mm;
  if (head.radius_mm !== undefined) kept.radius_mm = head.radius_mm;
  session.set({ head: Object.keys(kept).length === 0 ? undefined : kept });
}

/** @param {string} text beside the panel; empty when the entry is complete */
function tellEntry(text) {
  need("head-entry", HTMLElement).textContent = text;
}

/** @param {Session} session */
function showHeadChoices(session) {
  const list = need("heads", HTMLFieldSetElement);
  /** @param {string} name @param {string} title @param {string} source */
  const choiceElement = (name, title, source) => {
    const label = make("label", "", { class: "head-choice" });
    const words = make("span", "");
    words.append(make("span", typeset(title)), make("span", source, { class: "small" }));
    label.append(make("input", "", { type: "radio", name: "head", value: name }), words);
    return label;
  };
  list.addEventListener("change", (event) => {
    if (!(event.target instanceof HTMLInputElement)) return;
    const chosen = session.read().heads.findIndex((head) => head.name === /** @type {any} */ (event.target).value);
    if (chosen < 0) return;
    tellEntry("");
    changeHead(session, { shells: chosen === 0 ? undefined : session.read().heads[chosen].shells });
  });
  const mark = () => {
    const name = choiceName(session.read());
    for (const choice of list.querySelectorAll("input")) {
      choice.checked = choice.value === name;
      // What is edited is reached by editing, below.
      if (choice.value === EDITED) choice.disabled = name !== EDITED;
    }
  };
  session.watch(
    (state) => state.heads,
    (heads) => {
      const choices = heads.map(({ name, title, source }) => choiceElement(name, title, source));
      list.replaceChildren(
        ...list.querySelectorAll("legend"),
        ...choices,
        choiceElement(EDITED, word("head.edited"), word("head.edited-hint")),
      );
      mark();
    },
  );
  session.watch((state) => state.settings.head, mark);
}

/** The shells' fields, and the way back. @param {Session} session */
function showShells(session) {
  const list = need("shells", HTMLOListElement);

  /** @param {Element} row @param {string} part @returns {HTMLInputElement} */
  const fieldOf = (row, part) => /** @type {HTMLInputElement} */ (row.querySelector(`.shell-${part}`));

  const take = () => {
    const rows = [...list.children];
    const shells = rows.map((row) => ({
      tissue: fieldOf(row, "tissue").value.trim() || word("head.new"),
      ratio: numberOf(fieldOf(row, "ratio")),
      conductivity: numberOf(fieldOf(row, "conductivity")),
    }));
    let complete = true;
    rows.forEach((row, at) => {
      for (const part of /** @type {const} */ (["ratio", "conductivity"])) {
        const good = Number.isFinite(shells[at][part]);
        // An empty field of a new shell is not wrong yet.
        fieldOf(row, part).setAttribute("aria-invalid", String(!good && fieldOf(row, part).value.trim() !== ""));
        complete &&= good;
      }
    });
    tellEntry(complete ? "" : word("head.shell-incomplete"));
    if (!complete) return;
    const held = session.read().settings.head?.shells ?? session.read().heads[0]?.shells ?? [];
    if (!sameShells(shells, held)) changeHead(session, { shells });
  };

  /** @param {ShellSpec | null} shell @param {number} number */
  const shellElement = (shell, number) => {
    const row = make("li", "");
    for (const part of ["tissue", "ratio", "conductivity"]) {
      const label = make("label", "");
      const field = /** @type {HTMLInputElement} */ (
        make("input", "", {
          type: "text",
          autocomplete: "off",
          class: `shell-${part}`,
          "aria-label": shellLabel(part, number),
          ...(part === "tissue" ? {} : { inputmode: "decimal" }),
        })
      );
      if (part === "tissue") field.value = shell?.tissue ?? word("head.new");
      else fill(field, shell?.[/** @type {"ratio" | "conductivity"} */ (part)]);
      label.append(make("span", word(`head.${part}`), { "aria-hidden": "true" }), field);
      row.append(label);
    }
    const remove = make("button", word("head.remove"), {
      type: "button",
      class: "quiet shell-remove",
      "aria-label": shellLabel("remove", number),
    });
    remove.addEventListener("click", () => {
      row.remove();
      renumber();
      take();
      need("shell-add", HTMLButtonElement).focus();
    });
    row.append(remove);
    return row;
  };

  const renumber = () => {
    [...list.children].forEach((row, at) => {
      for (const part of ["tissue", "ratio", "conductivity", "remove"])
        fieldOf(row, part).setAttribute("aria-label", shellLabel(part, at + 1));
    });
    for (const button of list.querySelectorAll("button")) button.disabled = list.children.length === 1;
  };

  list.addEventListener("change", take);
  need("shell-add", HTMLButtonElement).addEventListener("click", () => {
    // The outermost shell stays the outermost.
    const row = shellElement(null, list.children.length);
    list.insertBefore(row, list.lastElementChild);
    renumber();
    fieldOf(row, "tissue").focus();
    fieldOf(row, "tissue").select();
  });

  /** @type {ShellSpec[] | undefined} */
  let written;
  const write = () => {
    const { settings, heads } = session.read();
    const shells = settings.head?.shells ?? heads[0]?.shells;
    if (shells === undefined || shells === written) return;
    written = shells;
    // What has just been typed stays as it was typed.
    const typed = list.contains(document.activeElement) && list.children.length === shells.length;
    if (typed && [...list.children].every((row, at) => numberOf(fieldOf(row, "ratio")) === shells[at].ratio)) return;
    list.replaceChildren(...shells.map((shell, at) => shellElement(shell, at + 1)));
    renumber();
  };
  need("head-standard", HTMLButtonElement).addEventListener("click", () => {
    tellEntry("");
    written = undefined;
    if (session.read().settings.head?.shells === undefined) write();
    else changeHead(session, { shells: undefined });
  });
  session.watch((state) => state.heads, write);
  session.watch((state) => state.settings.head, write);
}

/** The sphere's fields, and the way back. @param {Session} session */
function showSphere(session) {
  const centre = ["head-x", "head-y", "head-z"].map((id) => need(id, HTMLInputElement));
  const radius = need("head-radius", HTMLInputElement);
  for (const field of centre) {
    field.addEventListener("change", () => {
      const empty = centre.filter((one) => one.value.trim() === "").length;
      const numbers = centre.map(numberOf);
      const good = empty === 3 || numbers.every(Number.isFinite);
      tellEntry(good ? "" : word("head.centre-incomplete"));
      for (const one of centre) {
        const wrong = one.value.trim() !== "" && !Number.isFinite(numberOf(one));
        one.setAttribute("aria-invalid", String(wrong));
      }
      if (good) changeHead(session, { centre_mm: empty === 3 ? undefined : numbers });
    });
  }
  radius.addEventListener("change", () => {
    const empty = radius.value.trim() === "";
    const good = empty || Number.isFinite(numberOf(radius));
    tellEntry(good ? "" : word("head.radius-invalid"));
    radius.setAttribute("aria-invalid", String(!good));
    if (good) changeHead(session, { radius_mm: empty ? undefined : numberOf(radius) });
  });

  need("head-fitted", HTMLButtonElement).addEventListener("click", () => {
    tellEntry("");
    for (const field of [...centre, radius]) fill(field, undefined);
    const { head } = session.read().settings;
    if (head?.centre_mm !== undefined || head?.radius_mm !== undefined)
      changeHead(session, { centre_mm: undefined, radius_mm: undefined });
  });
  session.watch(
    (state) => state.settings.head,
    (head) => {
      centre.forEach((field, at) => {
        if (document.activeElement !== field) fill(field, head?.centre_mm?.[at]);
      });
      if (document.activeElement !== radius) fill(radius, head?.radius_mm);
    },
  );
  session.watch(
    (state) => state.answer?.preamble.head,
    (head) => {
      centre.forEach((field, at) => {
        field.placeholder = head === undefined ? "" : enteredText(Number(head.centre_mm[at].toFixed(1)));
      });
      radius.placeholder = head === undefined ? "" : enteredText(Number(head.radius_mm.toFixed(1)));
    },
  );
}

/** @param {Session} session */
export function showHead(session) {
  const body = need("head-rows", HTMLTableElement).tBodies[0];
  session.watch(
    (state) => state.answer?.sheet?.head,
    (head) => {
      need("head-title", HTMLElement).textContent = typeset(head?.title ?? "");
      need("head-source", HTMLElement).textContent = head?.source ?? "";
      writeRows(body, head?.rows ?? []);
    },
  );
  showHeadChoices(session);
  showShells(session);
  showSphere(session);
}
