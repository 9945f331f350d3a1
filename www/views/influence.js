/** What the fit of the map in view hangs on: each electrode left out in turn. Electrodes that many maps blame stand at the list. */

import { paintInfluence } from "../draw/influence.js";
import { explainedOf } from "../session/explanations.js";
import { typeset } from "../text/figures.js";
import { leaveOutText } from "../text/trust.js";
import { word } from "../text/words.js";
import { writeTable } from "./alternatives.js";
import { make, need } from "./element.js";
import { figureTools, showFigure } from "./figure.js";
import { keepPainted } from "./surface.js";
import { withTerms } from "./terms.js";
import { writeLines } from "./trust.js";

/** @import { Session } from "../session/session.js" */
/** @import { FigurePainter } from "./figure.js" */

/** Electrodes of the table before all are asked for. */
const FEW_ELECTRODES = 8;
const INFLUENCE_WIDE = 330;

/** Asked for only while it is looked at. @param {Session} session @param {"influence" | "what-if"} id */
export function askWhenOpen(session, id) {
  const panel = need(id, HTMLDetailsElement);
  panel.addEventListener("toggle", () => session.lookAt(id, panel.open));
}

/**
 * Its sentence, and whether there is anything of the map in view; the room of what was shown stays until then.
 * @template {{ sentence: string }} T
 * @param {"influence" | "what-if"} id
 * @param {T | null} told
 * @returns {told is T}
 */
export function toldIn(id, told) {
  need(`${id}-sentence`, HTMLElement).replaceChildren(...withTerms(typeset(told?.sentence ?? word("told.soon"))));
  need(id, HTMLElement).classList.toggle("waiting", told === null);
  return told !== null;
}

/** @param {Session} session */
export function showInfluence(session) {
  askWhenOpen(session, "influence");
  const more = need("influence-more", HTMLButtonElement);
  let all = false;
  const told = () => explainedOf(session.read()).influence;

  /** @type {FigurePainter} */
  const paintDiscOf = (width, around, penAt) => {
    const influence = told();
    const picture = session.read().answer?.sheet?.picture;
    const height = Math.min(width, INFLUENCE_WIDE);
    const words = { front: word("map.front"), left: word("map.left"), right: word("map.right"), above: word("map.above") };
    if (influence && picture) paintInfluence({ pen: penAt(0, 0), width, height }, { picture, influence, words }, around);
    return height;
  };
  const place = need("influence-figure", HTMLElement);
  const paint = keepPainted(place, (printing) => {
    if (told() !== null) showFigure(place, word("influence.figure"), printing, paintDiscOf);
  });
  figureTools(session, need("influence-tools", HTMLElement), () => {
    const influence = told();
    if (influence === null) return null;
    return { name: "inward-influence", title: word("influence.figure"), description: influence.sentence, width: INFLUENCE_WIDE, paint: paintDiscOf };
  });

  function writeElectrodes() {
    const electrodes = told()?.electrodes ?? [];
    const rows = electrodes.slice(0, all ? undefined : FEW_ELECTRODES).map(({ label, shift, rv }) => [label, shift, rv]);
    writeTable(need("influence-table", HTMLTableElement), [["electrode", "shift", "rv"].map((code) => word(`influence.${code}`)), ...rows]);
    more.hidden = electrodes.length <= FEW_ELECTRODES;
    more.textContent = word(all ? "influence.few" : "influence.all");
  }
  more.addEventListener("click", () => {
    all = !all;
    writeElectrodes();
  });

  session.watch(
    (state) => explainedOf(state).influence,
    (influence) => {
      if (!toldIn("influence", influence)) return;
      writeElectrodes();
      writeLines("influence-notes", influence.notes.map((text) => ({ text })));
      paint();
    },
  );

  session.watch(
    ({ suspects, answer }) => (suspects?.key === answer?.key ? suspects : null),
    (suspects) => {
      const list = need("suspects", HTMLElement);
      list.hidden = !suspects?.electrodes.length;
      need("suspects-sentence", HTMLElement).textContent = typeset(suspects?.sentence ?? "");
      need("suspects-lines", HTMLElement).replaceChildren(...(suspects?.electrodes ?? []).map(({ label, sentence }) => {
        const line = make("li", `${typeset(sentence)} `);
        const out = make("button", typeset(leaveOutText(label)), { type: "button", class: "quiet" });
        out.addEventListener("click", () => {
          // It goes with what is said of it.
          need("ledger", HTMLElement).focus();
          session.use(label, false);
        });
        for (const kind of ["pointerenter", "focus"]) out.addEventListener(kind, () => session.point(label));
        for (const kind of ["pointerleave", "blur"]) out.addEventListener(kind, () => session.point(null));
        line.append(out);
        return line;
      }));
    },
  );
}
