/** The two ways out of a report: paper, and a page of its own without a script. */

import { put } from "./pieces.js";

/** @typedef {"A4" | "letter"} PaperSize */

/** A report as one file that any browser shows. @param {string} title @param {HTMLElement[]} sections @returns {Blob} */
export function reportPage(title, sections) {
  const page = document.implementation.createHTMLDocument(title);
  page.documentElement.lang = "en-GB";
  /** @type {Record<string, string>[]} */
  const meta = [
    { charset: "utf-8" },
    { "http-equiv": "Content-Security-Policy", content: REPORT_POLICY },
    { name: "viewport", content: "width=device-width, initial-scale=1" },
    { name: "color-scheme", content: "light dark" },
  ];
  page.head.prepend(...meta.map((attributes) => put("meta", attributes)));
  const style = put("style", {});
  style.textContent = REPORT_STYLE;
  page.head.append(style);
  page.body.append(put("main", { class: "report" }, ...sections));
  // Written as XML writes it, which any reader of HTML takes as well: nothing in it needs another spelling there.
  const text = new XMLSerializer().serializeToString(page.documentElement);
  return new Blob([`<!doctype html>\n${text}\n`], { type: "text/html" });
}

/** Takes what was printed away again. */
let putAway = () => {};

/**
 * Prints a report in the place of the page.
 * @param {string} name of the file that a printer may make of it
 * @param {HTMLElement[]} sections
 * @param {PaperSize} size
 */
export async function printReport(name, sections, size) {
  putAway();
  const style = new CSSStyleSheet();
  style.replaceSync(`${REPORT_STYLE}@page{size:${size}}`);
  const root = document.documentElement;
  const before = document.title;
  const report = put("div", { class: "report", id: "report" }, ...sections);
  document.body.append(report);
  document.adoptedStyleSheets = [...document.adoptedStyleSheets, style];
  document.title = name;
  root.dataset.printing = "report";
  putAway = () => {
    putAway = () => {};
    report.remove();
    document.adoptedStyleSheets = document.adoptedStyleSheets.filter((one) => one !== style);
    document.title = before;
    delete root.dataset.printing;
    for (const kind of ENDS) removeEventListener(kind, over, true);
  };
  const over = () => putAway();
  await Promise.all([...report.querySelectorAll("image")].map((image) => /** @type {any} */ (image).decode?.().catch(() => {})));
  for (const kind of ENDS) addEventListener(kind, over, true);
  print();
}

/** Whoever works on after a browser that tells of no end of printing has printed. */
const ENDS = ["afterprint", "pointerdown", "keydown"];
