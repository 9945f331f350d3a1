/** The page begins where its address asks for: `#example=NAME&view=PANEL`. */

import { askedByAddress } from "../host/address.js";
import { carriedExamples } from "../intake/examples.js";
import { addressFault } from "../text/address.js";

/** @import { Session } from "../session/session.js" */

/** Panels by the names that addresses have for them, which never change. @type {Record<string, string>} */
const PANELS = {
  answer: "sentence",
  list: "overview",
  where: "where",
  slices: "slices",
  trust: "trust",
  alternatives: "alternatives",
  influence: "influence",
  "what-if": "what-if",
  populations: "populations",
  numbers: "numbers-panel",
  electrodes: "electrode-panel",
  head: "head-panel",
  understood: "assumed",
  response: "response",
  shares: "shares",
  "all-dipoles": "all-dipoles",
  groups: "groups",
  matching: "matching",
  table: "table-panel",
  leaving: "leaving",
  sealed: "sealed",
  words: "glossary",
};

/** A panel that is not there so long after all was computed does not come. */
const PATIENCE_MS = 2000;

/** @param {HTMLElement} panel */
function unfold(panel) {
  for (let part = /** @type {HTMLElement | null} */ (panel); part !== null; part = part.parentElement) {
    if (part instanceof HTMLDetailsElement) part.open = true;
  }
  const heading = panel.querySelector(":scope > summary");
  if (heading === null && !panel.hasAttribute("tabindex")) panel.tabIndex = -1;
  panel.scrollIntoView();
  /** @type {HTMLElement} */ (heading ?? panel).focus({ preventScroll: true });
}

/** @param {Session} session */
export function showAddress(session) {
  /** The panel that is waited for. @type {string | null} */
  let wanted = null;
  let timer = 0;

  const giveUp = () => {
    wanted = null;
  };

  function attempt() {
    clearTimeout(timer);
    if (wanted === null) return;
    const name = wanted;
    const { phase, progress, arriving, example, inputs } = session.read();
    const panel = document.getElementById(PANELS[name] ?? "");
    if (panel !== null && panel.closest("[hidden]") === null) {
      giveUp();
      return unfold(panel);
    }
    const nothing = phase === "ready" && example === null && inputs.maps === null;
    const known = Object.hasOwn(PANELS, name);
    if (progress !== null || arriving || (phase !== "answered" && !(nothing && !known))) return;
    timer = setTimeout(() => {
      giveUp();
      session.fail(addressFault(known ? "view-absent" : "view-unknown", name, Object.keys(PANELS)));
    }, known ? PATIENCE_MS : 0);
  }

  function follow() {
    const asked = askedByAddress();
    const [name, view] = [asked.get("example"), asked.get("view")];
    wanted = view ?? wanted;
    if (name !== null) {
      const examples = carriedExamples();
      const example = examples.find((one) => one.name === name);
      const shown = session.read().example;
      if (example === undefined) session.fail(addressFault("example-unknown", name, examples.map((one) => one.name)));
      else if (shown?.name !== name || shown.edited) session.show(example);
    }
    attempt();
  }

  // Whoever has begun to do something is not carried elsewhere.
  for (const act of ["pointerdown", "keydown", "wheel"]) addEventListener(act, giveUp, { passive: true });
  addEventListener("hashchange", follow);
  session.watch((state) => state, attempt);
  follow();
}
