/** Where what leaves is asked for: a report on paper or as a page, methods and technical notes to be pasted. */

import { copyText, saveBlob } from "../export/out.js";
import { writtenReport } from "../report/report.js";
import { typedMaps } from "../report/numbers.js";
import { printReport, reportPage } from "../report/ways.js";
import { freshMaps } from "../session/decompositions.js";
import { MOST_REPORTED } from "../session/paper.js";
import { chosenText, fileText, reportingText, tooManyText } from "../text/report.js";
import { word } from "../text/words.js";
import { confirmOn } from "./confirm.js";
import { need } from "./element.js";

/** @import { ReportPart } from "../session/paper.js" */
/** @import { Session } from "../session/session.js" */

/** @type {ReportPart[]} */
const PARTS = ["summary", "maps", "notes", "methods"];

/** @param {Session} session */
export function showLeaving(session) {
  const which = need("leaving-which", HTMLSelectElement);
  const numbers = need("leaving-numbers", HTMLInputElement);
  const fault = need("leaving-fault", HTMLElement);
  const status = need("leaving-status", HTMLElement);
  const progress = need("leaving-progress", HTMLProgressElement);
  const names = need("leaving-names", HTMLInputElement);
  const [print, save, methods, note, stop] = ["print", "save", "methods", "note", "stop"].map((what) => need(`leaving-${what}`, HTMLButtonElement));
  let making = false;

  /** @returns {{ indexes: number[], fault: string }} */
  function chosen() {
    const { answer, threshold, listed } = session.read();
    if (answer === null) return { indexes: [], fault: "" };
    /** @param {(map: MapRow, index: number) => boolean} fits */
    const those = (fits) => freshMaps(answer).flatMap((map, index) => ("rv" in map && fits(map, index) ? [index] : []));
    const { indexes, fault } =
      which.value === "view"
        ? { indexes: [answer.chosen], fault: "" }
        : which.value === "own"
          ? typedMaps(numbers.value, answer.count)
          : {
              indexes: which.value === "listed" ? [...listed] : those((map, index) => (which.value === "near" ? map.rv <= threshold : answer.verdicts?.[index] === "dipolar")),
              fault: "",
            };
    if (fault !== "") return { indexes, fault };
    const here = indexes.filter((index) => answer.maps[index] !== undefined).slice(0, MOST_REPORTED + 1);
    if (indexes.length > MOST_REPORTED) return { indexes, fault: tooManyText(indexes.length, MOST_REPORTED) };
    return { indexes: here, fault: here.length === 0 ? word("leaving.none") : "" };
  }

  /** @param {string} text */
  function tell(text) {
    fault.textContent = text;
    numbers.setAttribute("aria-invalid", String(text !== "" && which.value === "own"));
  }

  /** How many are chosen, or what is wrong, without being loud about what is still being typed. */
  function count() {
    const { answer } = session.read();
    need("leaving-own", HTMLElement).hidden = which.value !== "own";
    const { indexes, fault: wrong } = chosen();
    need("leaving-count", HTMLElement).textContent = answer === null || wrong !== "" ? "" : chosenText(indexes.length);
    // One map needs no choice.
    need("leaving-maps", HTMLElement).hidden = (answer?.count ?? 0) < 2;
  }

  /** @param {boolean} busy */
  function wait(busy) {
    making = busy;
    need("leaving-busy", HTMLElement).hidden = !busy;
    for (const button of [print, save]) button.setAttribute("aria-disabled", String(busy));
  }

  /** The report that is asked for; null where there is none, which has been told. */
  async function made() {
    if (making) return null;
    const parts = PARTS.filter((part) => need(`report-${part}`, HTMLInputElement).checked);
    const { indexes, fault: wrong } = chosen();
    const why = wrong !== "" ? wrong : parts.length === 0 ? word("leaving.no-parts") : "";
    tell(why);
    status.textContent = "";
    if (why !== "") {
      if (which.value === "own" && wrong !== "") numbers.focus();
      return null;
    }
    wait(true);
    let given = false;
    stop.onclick = () => {
      given = true;
      session.stopPaper();
    };
    try {
      const explained = need("leaving-explained", HTMLInputElement).checked;
      const work = await session.paper({ maps: indexes, parts, explained }, (step) => {
        progress.value = step.done / step.total;
        status.textContent = reportingText(step);
      });
      status.textContent = word(work !== null ? "leaving.ready" : given ? "leaving.given-up" : "leaving.changed");
      if (work === null) return null;
      const added = { person: need("leaving-person", HTMLInputElement).value.trim(), remarks: need("leaving-remarks", HTMLTextAreaElement).value.trim() };
      const name = fileText(session.read().namesShown ? work.own.name : "", work.date);
      return { ...writtenReport(work, session.read(), added), name };
    } catch (error) {
      status.textContent = given ? word("leaving.given-up") : "";
      if (!given) session.fail(error);
      return null;
    } finally {
      if (document.activeElement === stop) save.focus();
      wait(false);
    }
  }

  print.addEventListener("click", async () => {
    const report = await made();
    const size = need("leaving-letter", HTMLInputElement).checked ? "letter" : "A4";
    if (report !== null) await printReport(report.name, report.sections, size);
  });
  save.addEventListener("click", async () => {
    const report = await made();
    if (report !== null) saveBlob(reportPage(report.title, report.sections), `${report.name}.html`);
  });
  methods.addEventListener("click", async () => {
    const told = await session.methods();
    if (told !== null) confirmOn(methods, await copyText([told.paragraph, ...told.references].join("\n\n")));
  });
  note.addEventListener("click", async () => {
    const told = await session.note();
    if (told === null) return;
    const parts = told.parts.map(({ heading, lines }) => [heading, ...lines].join("\n"));
    confirmOn(note, await copyText([told.title, ...parts].join("\n\n")));
  });

  which.addEventListener("change", () => {
    tell("");
    count();
    if (which.value === "own") numbers.focus();
  });
  numbers.addEventListener("input", count);
  numbers.addEventListener("change", () => tell(numbers.value.trim() === "" ? "" : chosen().fault));
  names.addEventListener("change", () => session.showNames(names.checked));
  session.watch(
    ({ namesShown }) => namesShown,
    (shown) => {
      names.checked = shown;
      need("leaving-hidden", HTMLElement).textContent = word(shown ? "leaving.shown" : "leaving.hidden");
    },
  );
  session.watch(({ answer }) => answer, count);
  session.watch(({ listed }) => listed, count);
  session.watch(({ threshold }) => threshold, count);
  session.watch(
    ({ answer }) => answer?.verdicts != null,
    (some) => {
      const option = which.querySelector("[value=dipolar]");
      if (option instanceof HTMLOptionElement) option.disabled = !some;
    },
  );
}
