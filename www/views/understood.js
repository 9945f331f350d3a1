/**
 * What was understood: a card for each file, and one for the electrodes on the head, with every inference to be changed
 * in place.
 */

import { inputOfFile } from "../intake/files.js";
import { harmless, shortName, typeset } from "../text/figures.js";
import { columnText, factsText, labelLines, roleText, word } from "../text/words.js";
import { make, need } from "./element.js";
import { showPreview } from "./preview.js";
import { choiceRow, enteredList, fieldRow, keepTyped, settingId, timeRows } from "./setting.js";

/** @import { Session } from "../session/session.js" */

/** A choice with its sentence and how it came about. @param {Session} session @param {Choice} choice */
function inferenceElement(session, choice) {
  const text = typeset(shown(choice.sentence));
  const row =
    choice.options.length > 1 ? choiceRow(session.setAt, harmlessChoice(choice), text) : make("p", text, { class: "setting-row" });
  const mark = make("span", word(`from.${choice.from}`), { class: `from from-${choice.from}` });
  (row.querySelector("label") ?? row).append(" ", mark);
  return row;
}

/** How a table is written: found, it is seldom wrong, and stands folded away. @param {Choice} choice */
function isPlain({ setting, from }) {
  const written = ["encoding", "delimiter", "decimal", "label"].includes(setting) || setting.startsWith("columns.");
  return written && (from === "found" || from === "declared");
}

/** What a file is comes first. @param {Choice} choice */
function rank({ setting }) {
  return setting === "role" ? 0 : 1;
}

/** Pieces of the input in a sentence may be long. @param {string} text */
function shown(text) {
  return harmless(text).replace(/\S{49,}/gu, shortName);
}

/** @param {Choice} choice */
function harmlessChoice({ options, ...choice }) {
  return { ...choice, options: options.map(({ value, label }) => ({ value, label: shown(label) })) };
}

/** @param {string} title @param {string} role @returns {HTMLElement} */
function cardElement(title, role) {
  const card = make("section", "", { class: "card", "aria-label": title });
  const heading = make("h3", title);
  if (role !== "") heading.append(make("span", ` · ${role}`, { class: "small" }));
  card.append(heading);
  return card;
}

/** @param {UnderstoodFile[]} parts of one file @returns {HTMLElement} */
function fileCard(parts) {
  const needed = parts.filter(({ role }) => role !== "unused");
  const roles = [...new Set((needed.length > 0 ? needed : parts).map(({ role }) => roleText(role)))];
  const card = cardElement(shortName(parts[0].name), roles.join(", "));
  card.dataset.file = parts[0].name;
  for (const part of needed.length > 0 ? needed : parts.slice(0, 1)) {
    const line = make("p", "", { class: "small" });
    if (part.part !== null) line.append(make("strong", `${shortName(part.part)}: `));
    line.append(factsText(part), ...[columnText(part)].filter((text) => text !== "").map((text) => ` ${text}`));
    card.append(line);
  }
  return card;
}

/** Asks for the matrix without which an unmixing matrix may give wrong maps. @param {Session} session */
function spheringRow(session) {
  const row = make("p", word("understood.sphering"), { class: "setting-row" });
  const pick = make("span", "", { class: "pick button" });
  const file = /** @type {HTMLInputElement} */ (make("input", "", { type: "file", id: "sphering-file" }));
  pick.append(make("label", word("pick.sphering"), { for: file.id }), file);
  file.addEventListener("change", async () => {
    const [picked] = file.files ?? [];
    try {
      if (picked !== undefined) session.addSphering(await inputOfFile(picked));
    } catch (error) {
      session.fail(error);
    }
  });
  row.append(pick);
  return row;
}

/** What can be said of the maps beyond what was inferred. @param {Session} session @param {Understood} understood */
function furtherRows(session, { columns_are: are, times }) {
  const { settings, inputs } = session.read();
  /** @type {Record<string, HTMLElement[]>} */
  const rows = {};
  if (are === "time-points") rows.columnsAre = timeRows(session.setAt, settings, times);
  if (settings.mapsAre === "unmixing" && !inputs.others.some(({ role }) => role === "sphering")) {
    rows.mapsAre = [spheringRow(session)];
  }
  return rows;
}

/**
 * @param {Session} session
 * @param {Understood} understood
 * @param {string} name of a file
 * @param {boolean} open whether what is folded away was unfolded
 */
function cardOf(session, understood, name, open) {
  const card = fileCard(understood.files.filter((file) => file.name === name));
  const own = understood.choices.filter(({ file }) => file === name).sort((a, b) => rank(a) - rank(b));
  const further = furtherRows(session, understood);
  for (const choice of own.filter((one) => !isPlain(one))) {
    card.append(inferenceElement(session, choice), ...(further[choice.setting] ?? []));
  }
  const plain = own.filter(isPlain);
  if (plain.length > 0) {
    const details = /** @type {HTMLDetailsElement} */ (make("details", ""));
    details.open = open;
    const summary = make("summary", word("understood.written"), { id: settingId(["files", name, "written"]) });
    details.append(summary, ...plain.map((choice) => inferenceElement(session, choice)));
    card.append(details);
  }
  return card;
}

/** A box to tick. @param {Session} session @param {"unusualHead" | "mirror"} setting */
function tickRow(session, setting) {
  const label = make("label", "", { class: "tick" });
  const box = /** @type {HTMLInputElement} */ (make("input", "", { type: "checkbox", id: `set-${setting}` }));
  box.checked = session.read().settings[setting] === true;
  box.addEventListener("change", () => session.setAt([setting], box.checked ? true : undefined));
  label.append(box, make("span", word(`understood.${setting}`)));
  const row = make("div", "", { class: "setting-row", "data-setting": setting });
  row.append(label);
  if (setting === "unusualHead") row.append(make("p", word("understood.unusual-caution"), { class: "small" }));
  return row;
}

/**
 * Electrodes on the head, with the choices that are of no single file.
 * @param {Session} session
 * @param {Understood} understood
 */
function headCard(session, understood) {
  const { settings, offers } = session.read();
  const card = cardElement(word("understood.head"), "");
  card.id = "head-card";
  const rows = make("div", "");
  card.append(need("preview", HTMLElement), rows);
  rows.append(...understood.choices.filter(({ file }) => file === null).map((choice) => inferenceElement(session, choice)));
  const measured = understood.choices.some(({ setting }) => setting === "axes");
  const asked = understood.choices.some(({ setting }) => setting === "mirror");
  if (measured && !asked) rows.append(tickRow(session, "mirror"));
  for (const line of labelLines(understood.labels)) rows.append(make("p", line, { class: "small" }));
  rows.append(
    fieldRow(
      session.setAt,
      ["interpolated"],
      word("understood.interpolated"),
      (settings.interpolated ?? []).join(", "),
      enteredList,
    ),
    tickRow(session, "unusualHead"),
  );
  const laplacian = offers.find(({ setting }) => setting === "laplacian");
  if (laplacian !== undefined) {
    const value = settings.laplacian ?? undefined;
    const from = value === undefined ? undefined : "setting";
    rows.append(
      choiceRow(session.setAt, { ...laplacian, path: ["laplacian"], value, from }, word("understood.laplacian")),
    );
  }
  return card;
}

/** @param {Session} session */
export function showUnderstood(session) {
  const cards = need("cards", HTMLElement);
  const paint = showPreview(session);
  session.watch(
    (state) => state.answer?.preamble,
    (preamble) => {
      if (preamble === undefined) return;
      const { understood } = preamble;
      const names = [...new Set(understood.files.map(({ name }) => name))];
      const unfolded = [...cards.querySelectorAll("details[open]")].map((details) => details.parentElement?.dataset.file);
      const elements = names.map((name) => cardOf(session, understood, name, unfolded.includes(name)));
      const failure = need("failure", HTMLElement);
      if (cards.contains(failure)) need("failure-place", HTMLElement).append(failure);
      // Whoever works in the cards goes on where they were.
      keepTyped(cards, () => cards.replaceChildren(...elements, headCard(session, understood)));
      paint();
    },
  );
}
