/**
 * The electrodes one by one: what the map has there, what the dipole puts there, what is left over, and a box each to
 * leave it out. The values of the one pointed at stand beside the maps too.
 */

import { explainedOf } from "../session/explanations.js";
import { shortName, typeset } from "../text/figures.js";
import { electrodeParts, leftOutText, symbolOf, word } from "../text/words.js";
import { make, need } from "./element.js";

/** @import { Session } from "../session/session.js" */

/** @typedef {"misfit" | "label" | "table"} ElectrodeOrder */
/**
 * @typedef {object} ElectrodeLine
 * @property {HTMLTableRowElement} row
 * @property {HTMLInputElement} box
 * @property {HTMLElement[]} cells
 * @property {SheetElectrode} sheet
 * @property {number} at its place in the table
 */

const COLLATOR = new Intl.Collator("en", { numeric: true });

/** @type {Record<ElectrodeOrder, (a: ElectrodeLine, b: ElectrodeLine) => number>} */
const ORDERS = {
  misfit: (a, b) => b.sheet.misfit - a.sheet.misfit || a.at - b.at,
  label: (a, b) => COLLATOR.compare(a.sheet.label, b.sheet.label) || a.at - b.at,
  table: (a, b) => a.at - b.at,
};

/** @param {string[]} one @param {string[]} other */
function sameLabels(one, other) {
  return one.length === other.length && one.every((label) => other.includes(label));
}

/** @param {Session} session */
export function showElectrodes(session) {
  const list = need("electrode-list", HTMLElement);
  const body = need("electrode-table", HTMLTableElement).tBodies[0];
  const heads = [...need("electrode-table", HTMLTableElement).querySelectorAll("th[data-order]")];
  const units = [...need("electrode-table", HTMLTableElement).querySelectorAll(".unit-of")];
  const readout = need("electrode-readout", HTMLElement);
  const problem = need("electrode-problem", HTMLElement);
  /** @type {Map<string, ElectrodeLine>} */
  let lines = new Map();
  /** @type {ElectrodeOrder} */
  let order = "misfit";
  /** The order is no longer the values' one; it is set right when nobody is in the list. */
  let stale = false;
  /** Whether one of the list's own rows is being pointed at. */
  let within = false;
  /** The map whose values the list shows. */
  let shown = -1;

  /**
   * One box takes the Tab key and the arrow keys go on from it: seventy stops would be a barrier.
   * @param {HTMLInputElement} box
   */
  const stopAt = (box) => {
    for (const line of lines.values()) line.box.tabIndex = line.box === box ? 0 : -1;
  };
  body.addEventListener("keydown", (event) => {
    const boxes = [...body.querySelectorAll("input")];
    const at = boxes.findIndex((box) => box === event.target);
    const next = { ArrowDown: at + 1, ArrowUp: at - 1, Home: 0, End: boxes.length - 1 }[event.key];
    if (at < 0 || next === undefined || event.ctrlKey || event.metaKey || event.altKey) return;
    event.preventDefault();
    boxes[next]?.focus();
  });

  const sortLines = () => {
    stale = false;
    const sorted = [...lines.values()].sort(ORDERS[order]);
    if (sorted.some(({ row }, at) => body.rows[at] !== row)) body.append(...sorted.map(({ row }) => row));
    if (sorted.length > 0 && !list.matches(":focus-within")) stopAt(sorted[0].box);
    for (const head of heads) {
      const way = order === "misfit" ? "descending" : "ascending";
      head.setAttribute("aria-sort", head.getAttribute("data-order") === order ? way : "none");
    }
  };
  const settle = () => {
    if (stale && !list.matches(":hover, :focus-within")) sortLines();
  };
  list.addEventListener("pointerleave", settle);
  list.addEventListener("focusout", () => setTimeout(settle));

  for (const choice of need("electrode-order", HTMLElement).querySelectorAll("input")) {
    choice.addEventListener("change", () => {
      order = /** @type {ElectrodeOrder} */ (choice.value);
      sortLines();
      list.scrollTop = 0;
    });
  }
  need("electrodes-back", HTMLButtonElement).addEventListener("click", () => {
    session.set({ exclude: [] });
    list.focus();
  });
  need("electrode-restore", HTMLButtonElement).addEventListener("click", () => {
    session.restore();
    list.focus();
  });

  /** @param {SheetElectrode} sheet @param {number} at @returns {ElectrodeLine} */
  function makeLine(sheet, at) {
    const row = document.createElement("tr");
    const box = document.createElement("input");
    box.type = "checkbox";
    const name = make("label", "");
    name.append(box, make("span", shortName(sheet.label)));
    const head = make("th", "", { scope: "row" });
    head.append(name);
    const cells = ["measured", "projected", "residual", "share"].map((part) => make("td", "", { "data-part": part }));
    row.append(head, ...cells);
    box.addEventListener("change", () => session.use(sheet.label, box.checked));
    box.addEventListener("focus", () => {
      stopAt(box);
      session.point(sheet.label);
    });
    box.addEventListener("blur", () => session.point(null));
    // A row that scrolls under a resting mouse is not pointed at, and the list does not scroll for its own rows.
    row.addEventListener("pointermove", ({ movementX, movementY }) => {
      if ((movementX === 0 && movementY === 0) || session.read().pointed === sheet.label) return;
      within = true;
      session.point(sheet.label);
      within = false;
    });
    row.addEventListener("pointerleave", () => {
      if (session.read().pointed !== sheet.label) return;
      const focused = [...lines.values()].find((line) => line.box === document.activeElement);
      session.point(focused?.sheet.label ?? null);
    });
    return { row, box, cells, sheet, at };
  }

  /** @param {Sheet} sheet */
  function fill({ electrodes, scale }) {
    const labels = electrodes.map(({ label }) => label);
    if (!sameLabels(labels, [...lines.keys()])) {
      lines = new Map(electrodes.map((electrode, at) => [electrode.label, makeLine(electrode, at)]));
      body.replaceChildren();
    }
    electrodes.forEach((electrode, at) => {
      const line = /** @type {ElectrodeLine} */ (lines.get(electrode.label));
      Object.assign(line, { sheet: electrode, at });
      const texts = [electrode.measured, electrode.projected, electrode.residual];
      [...texts, electrode.used ? electrode.share : word("electrode.out")].forEach((text, cell) => {
        line.cells[cell].textContent = typeset(text);
      });
      line.row.classList.toggle("out", !electrode.used);
    });
    for (const unit of units) unit.textContent = symbolOf(scale.unit);
  }

  function showReadout() {
    const { answer, pointed } = session.read();
    const sheet = answer?.sheet;
    const electrode = sheet?.electrodes.find(({ label }) => label === pointed);
    readout.classList.toggle("small", electrode === undefined);
    if (!sheet || electrode === undefined) {
      readout.textContent = word("electrode.hint");
      return;
    }
    readout.replaceChildren(
      make("strong", shortName(electrode.label)),
      ...electrodeParts(electrode, sheet.scale.unit).map((part) => make("span", typeset(part))),
      // The maps may show the dipole elsewhere.
      ...(explainedOf(session.read()).hand === null ? [] : [make("span", word("hand.values"))]),
    );
  }

  session.watch(
    (state) => state.answer?.sheet,
    (sheet, { answer }) => {
      if (!sheet || answer === null) return;
      const before = lines;
      fill(sheet);
      stale = true;
      // Rows do not move under a hand or a cursor, unless they are another map's.
      if (lines !== before || shown !== answer.chosen) sortLines();
      else settle();
      shown = answer.chosen;
      showReadout();
    },
  );
  session.watch(
    (state) => state.pointed,
    (pointed) => {
      for (const [label, { row }] of lines) row.classList.toggle("pointed", label === pointed);
      const row = lines.get(pointed ?? "")?.row;
      if (row !== undefined && !within && !list.matches(":hover, :focus-within")) {
        const beside = row.offsetTop - (list.clientHeight - row.offsetHeight) / 2;
        list.scrollTop = beside;
      }
      showReadout();
    },
  );
  session.watch(
    (state) => state,
    (_, { settings, answer, failure }) => {
      const out = settings.exclude ?? [];
      for (const [label, { box }] of lines) box.checked = !out.includes(label);
      const count = [...lines.keys()].filter((label) => out.includes(label)).length;
      need("electrodes-out", HTMLElement).textContent = leftOutText(count, lines.size);
      need("electrodes-back", HTMLButtonElement).hidden = out.length === 0;
      const refused = failure !== null && answer !== null && !sameLabels(out, answer.settings.exclude ?? []);
      problem.hidden = !refused;
      need("electrode-problem-text", HTMLElement).textContent = refused ? failure.message : "";
    },
  );
}
