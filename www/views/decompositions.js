/**
 * The decompositions that are open: a line each with its name, to be written over, how many maps were fitted, and what
 * else is known of it. One of a single map needs no such line.
 */

import { inOne } from "./several.js";
import { freshMaps } from "../session/decompositions.js";
import { inputOfFile } from "../intake/files.js";
import { enteredNumber, enteredText, typeset } from "../text/figures.js";
import { decompositionText, actionText, word } from "../text/words.js";
import { make, need, rewrite } from "./element.js";
import { countsOf } from "./ledger.js";
import { withTerms } from "./terms.js";

/** @import { Session } from "../session/session.js" */

/** @typedef {{ element: HTMLElement, update: (one: Decomposition, answer: Answer | null, is: { now: boolean, alone: boolean, stopped: boolean, threshold: number }) => void }} Line */

/**
 * @param {string} id
 * @param {string} label
 * @param {(text: string) => boolean} take whether the text will do
 */
function entry(id, label, take) {
  const field = /** @type {HTMLInputElement} */ (
    make("input", "", { type: "text", id, autocomplete: "off", spellcheck: "false", "aria-label": label })
  );
  field.addEventListener("change", () => field.setAttribute("aria-invalid", String(!take(field.value))));
  field.addEventListener("keydown", (event) => {
    if (event.key === "Enter") field.blur();
  });
  /** @param {string} text */
  const write = (text) => {
    if (document.activeElement !== field && field.value !== text) field.value = text;
  };
  return { field, write };
}

/** Subject and mutual-information reduction of a decomposition. @param {Session} session @param {number} id */
function makeMore(session, id) {
  const subject = entry(`subject-${id}`, word("decomposition.subject"), (text) => {
    session.setSubject(id, text.trim());
    return true;
  });
  const information = entry(`information-${id}`, word("decomposition.information"), (text) => {
    const value = text.trim() === "" ? null : enteredNumber(text);
    if (value === null || Number.isFinite(value)) session.setInformation(id, value);
    return value === null || Number.isFinite(value);
  });
  information.field.inputMode = "decimal";
  const pairs = [
    { field: subject.field, code: "decomposition.subject" },
    { field: information.field, code: "decomposition.information" },
  ].map(({ field, code }) => {
    const label = make("label", "");
    const hint = make("span", "", { class: "small" });
    hint.append(...withTerms(word(`${code}-hint`)));
    field.removeAttribute("aria-label");
    label.append(make("span", word(code)), field);
    const pair = make("div", "");
    pair.append(label, hint);
    return pair;
  });
  return {
    pairs,
    /** @param {Decomposition | undefined} one */
    update(one) {
      if (one === undefined) return;
      subject.write(one.subject);
      information.write(one.information === null ? "" : enteredText(one.information));
    },
  };
}

/** @param {Session} session @param {number} id @returns {Line} */
function makeLine(session, id) {
  const element = make("li", "", { class: "decomposition" });
  const name = entry(`decomposition-${id}`, word("decomposition.name"), (text) => {
    if (text.trim() !== "") session.renameDecomposition(id, text.trim());
    return text.trim() !== "";
  });
  name.field.classList.add("decomposition-name");
  const facts = make("p", "", { class: "small decomposition-facts" });
  const progress = /** @type {HTMLProgressElement} */ (make("progress", "", { "aria-label": word("state.busy") }));
  const failure = make("p", "", { class: "decomposition-failure" });
  const tools = make("div", "", { class: "tools" });
  const open = /** @type {HTMLButtonElement} */ (make("button", word("decomposition.open"), { type: "button" }));
  const remove = make("button", word("remove"), { type: "button", class: "quiet" });
  open.addEventListener("click", () => session.openDecomposition(id));
  remove.addEventListener("click", () => {
    session.removeDecomposition(id);
    need("add-decomposition", HTMLInputElement).focus();
  });

  const more = make("div", "", { class: "decomposition-more", id: `about-${id}`, hidden: "" });
  const unfold = make("button", word("decomposition.more"), { type: "button", class: "quiet", "aria-expanded": "false" });
  unfold.setAttribute("aria-controls", more.id);
  /** What is folded away is made when it is first unfolded: of hundreds of lines it would be half of all elements. @type {ReturnType<typeof makeMore> | null} */
  let about = null;
  unfold.addEventListener("click", () => {
    if (about === null) more.append(...(about = makeMore(session, id)).pairs);
    about.update(session.read().decompositions.find((one) => one.id === id));
    more.hidden = !more.hidden;
    unfold.setAttribute("aria-expanded", String(!more.hidden));
  });
  tools.append(open, unfold, remove);
  element.append(name.field, facts, progress, tools, failure, more);
  /** What its buttons are named after. @type {string | null} */
  let called = null;
  let shown = false;

  return {
    element,
    update(one, answer, { now, alone, stopped, threshold }) {
      const fault = one.failure;
      const count = answer?.count ?? 0;
      const counts = answer === null ? null : countsOf(freshMaps(answer), threshold);
      name.write(one.name);
      about?.update(one);
      rewrite(facts, decompositionText({ ...one, count, counts, threshold, stopped }));
      progress.hidden = stopped || fault !== null || (counts !== null && counts.here >= count);
      if (counts === null) progress.removeAttribute("value");
      else progress.value = counts.here / Math.max(1, count);
      // That of the one that is shown stands above its answer.
      failure.hidden = fault === null || now;
      rewrite(failure, fault === null ? "" : typeset(`${fault.message} ${fault.hint}`.trim()));
      element.toggleAttribute("data-now", now && !alone);
      open.hidden = alone;
      rewrite(open, word(now ? "decomposition.now" : "decomposition.open"));
      open.setAttribute("aria-pressed", String(now));
      remove.hidden = alone;
      if (one.name === called && now === shown) return;
      [called, shown] = [one.name, now];
      for (const button of [open, unfold, remove]) {
        button.setAttribute("aria-label", actionText(button.textContent ?? "", one.name));
      }
    },
  };
}

/** @param {Session} session */
export function showDecompositions(session) {
  const section = need("decompositions", HTMLElement);
  const list = need("decomposition-list", HTMLElement);
  const add = need("add-decomposition", HTMLInputElement);
  /** @type {Map<number, Line>} */
  const lines = new Map();

  add.addEventListener("change", async () => {
    const picked = [...(add.files ?? [])];
    add.value = "";
    try {
      await session.addDecompositions(picked.map(inputOfFile));
    } catch (error) {
      session.fail(error);
    }
  });

  function show() {
    const { decompositions, current, answer, stopped, threshold } = session.read();
    section.toggleAttribute("data-alone", decompositions.length < 2);
    section.hidden = decompositions.length < 2 && (answer === null || answer.count < 2);
    for (const id of lines.keys()) if (!decompositions.some((one) => one.id === id)) lines.delete(id);
    for (const one of decompositions) {
      const line = lines.get(one.id) ?? makeLine(session, one.id);
      lines.set(one.id, line);
      const now = one.id === current;
      line.update(one, now ? answer : one.answer, { now, alone: decompositions.length < 2, stopped, threshold });
    }
    const wanted = [...lines.values()].map(({ element }) => element);
    if (wanted.some((element, at) => list.children[at] !== element) || list.childElementCount > wanted.length) {
      list.replaceChildren(...wanted);
    }
  }
  const showSoon = inOne(show);
  session.watch((state) => state.decompositions, showSoon);
  session.watch((state) => state.answer, showSoon);
  session.watch((state) => state.stopped, show);
  session.watch((state) => state.threshold, show);
}
