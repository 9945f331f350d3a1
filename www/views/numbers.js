/**
 * The numbers, each with its unit and a line on its meaning; the activation's standard deviation is entered beside
 * the strength it scales. A copy of the table and the whole report.
 */

import { copyText, saveBlob } from "../export/out.js";
import { tableText } from "../export/table.js";
import { enteredNumber, enteredText, NO_BREAK, typeset } from "../text/figures.js";
import { reportLacksText } from "../text/trust.js";
import { word } from "../text/words.js";
import { confirmOn } from "./confirm.js";
import { make, need } from "./element.js";
import { writeRows } from "./rows.js";
import { withTerms } from "./terms.js";

/** @import { Session } from "../session/session.js" */

const REPORT_NAME = "inward-report.json";

/** @param {Session} session */
function activationRow(session) {
  const element = make("tr", "", { class: "setting" });
  const heading = make("th", "", { scope: "row" });
  const label = make("label", word("activation"), { for: "activation-sd" });
  heading.append(label);
  const field = /** @type {HTMLInputElement} */ (
    make("input", "", {
      type: "text",
      inputmode: "decimal",
      autocomplete: "off",
      id: "activation-sd",
      "aria-describedby": "activation-meaning activation-fault",
    })
  );
  const clear = /** @type {HTMLButtonElement} */ (
    make("button", word("activation.clear"), { type: "button", class: "quiet", id: "activation-sd-clear" })
  );
  const value = make("td", "", { class: "value" });
  value.append(field, clear);
  const meaning = make("td", "", { class: "meaning small" });
  const words = make("span", "", { id: "activation-meaning" });
  words.append(...withTerms(word("activation.meaning")));
  const fault = make("p", "", { class: "entry-fault", id: "activation-fault", role: "status" });
  meaning.append(words, fault);
  element.append(heading, value, meaning);

  /** @param {boolean} good */
  const judge = (good) => {
    field.setAttribute("aria-invalid", String(!good));
    fault.textContent = good ? "" : word("activation.invalid");
  };
  field.addEventListener("change", () => {
    const entered = enteredNumber(field.value);
    const good = field.value.trim() === "" || (Number.isFinite(entered) && entered > 0);
    judge(good);
    if (good) session.setActivation(field.value.trim() === "" ? null : entered);
  });
  clear.addEventListener("click", () => {
    judge(true);
    field.value = "";
    field.focus();
    session.setActivation(null);
  });
  session.watch(
    ({ answer, settings }) => (answer === null ? null : (settings.activationSd[answer.chosen] ?? null)),
    (held) => {
      clear.hidden = held === null;
    },
  );
  session.watch(
    ({ answer }) => answer?.chosen,
    () => {
      const { answer, settings } = session.read();
      const held = answer === null ? null : (settings.activationSd[answer.chosen] ?? null);
      field.value = held === null ? "" : enteredText(held);
      judge(true);
    },
  );
  session.watch(
    ({ settings }) => settings.activationSd,
    (values) => {
      const held = values[session.read().answer?.chosen ?? 0] ?? null;
      if (document.activeElement !== field) field.value = held === null ? "" : enteredText(held);
    },
  );
  return element;
}

/** @param {Session} session */
export function showNumbers(session) {
  const body = need("numbers", HTMLTableElement).tBodies[0];
  const copy = need("copy-table", HTMLButtonElement);
  const download = need("download-json", HTMLButtonElement);
  const own = { after: "strength", element: activationRow(session) };
  let saving = false;

  copy.addEventListener("click", async () => {
    const rows = session.read().answer?.sheet?.rows;
    if (rows === undefined) return;
    const heading = [word("numbers.quantity"), word("numbers.value"), word("numbers.unit")];
    confirmOn(copy, await copyText(tableText(rows, heading)));
  });
  download.addEventListener("click", async () => {
    if (saving) return;
    saving = true;
    const report = await session.report();
    saving = false;
    if (report !== null) saveBlob(report, REPORT_NAME);
  });

  const lacks = need("report-lacks", HTMLElement);
  session.watch(
    ({ answer, populations }) => `${answer?.key} ${answer?.count} ${populations?.answer} ${populations?.state}`,
    () => {
      // Its room stays, so that nothing moves when all is drawn.
      lacks.textContent = typeset(reportLacksText(session.reportLacks())) || NO_BREAK;
    },
  );

  session.watch(
    (state) => state.answer?.sheet,
    (sheet) => writeRows(body, sheet?.rows ?? [], own),
  );
}
