/** Sentences for what can go wrong in the page itself. The engine's own errors bring theirs along. */

/** @type {Record<string, { message: string, hint: string }>} */
const PAGE_FAULTS = {
  "wasm-unavailable": {
    message: "This browser does not let the page run WebAssembly, which the computation needs.",
    hint: "Open the file in a current browser, or switch off a lockdown mode or a policy that forbids WebAssembly.",
  },
  "worker-unavailable": {
    message: "This browser does not let the page start a worker, where the computation runs.",
    hint: "Open the file in a current browser, outside of a frame that forbids scripts.",
  },
  "worker-lost": {
    message: "The browser ended the worker in which the computation ran, perhaps for lack of memory.",
    hint: "Close other tabs or split a large table, then give the map again: it gets a fresh worker.",
  },
  "memory-lacking": {
    message: "The browser has not enough memory left for this.",
    hint: "Close other tabs, or split the table into several, and try again.",
  },
  "file-unreadable": {
    message: "The browser could not read that file.",
    hint: "It may have been moved, renamed or locked, or be a folder. Give the file itself, or paste its content.",
  },
  "file-large": {
    message: "At most 64 MiB are read, and that file is larger.",
    hint: "Split the table, or leave out columns that are not needed.",
  },
  "work-damaged": {
    message: "That saved work is damaged: what stands in it is not what was saved.",
    hint: "Nothing has changed here. Take another copy of the file; a tool that changes text on its way, such as mail, can damage it. The details name the place.",
  },
  "work-newer": {
    message: "That work was saved by a newer version of this page, which writes more than this one can read.",
    hint: "Nothing has changed here. Open it with the newer page, whose version is in the details.",
  },
  "work-other": {
    message: "That file says what came out, not what was put in: a session cannot be taken up from it.",
    hint: "Give the tables themselves, or the file that “Save work” has written.",
  },
  "work-alone": {
    message: "Saved work takes the place of all that is there, so it has to come alone.",
    hint: "Nothing was taken of these files. Give the saved work by itself, and others after it.",
  },
  "page-error": {
    message: "The page stopped on an error of its own.",
    hint: "Reload it and try again. If it happens again, please report it with the details below.",
  },
};

/** Gives a fault without words those of its code. @param {Fault} fault @returns {Fault} */
export function pageFault(fault) {
  if (fault.message !== "") return fault;
  const words = PAGE_FAULTS[fault.code] ?? PAGE_FAULTS["page-error"];
  const file = fault.where?.file;
  const message = file ? words.message.replace("that file", `the file “${file}”`) : words.message;
  return { ...fault, ...words, message };
}

const PLACE_WORDS = /** @type {const} */ ({
  file: "",
  line: "line",
  column: "column",
  byte: "byte",
  label: "electrode",
  map: "map",
});

/** A place in words: "map table, line 3, column 2". @param {Place | null} place */
function placeText(place) {
  if (place === null) return "";
  const parts = [];
  if (place.input === "maps") parts.push("map table");
  else if (place.input === "electrodes") parts.push("electrode table");
  else if (place.input) parts.push(place.input);
  for (const [key, word] of Object.entries(PLACE_WORDS)) {
    const value = place[/** @type {keyof typeof PLACE_WORDS} */ (key)];
    if (value !== null && value !== undefined) parts.push(`${word} ${value}`.trim());
  }
  return parts.join(", ");
}

/** @param {Program} program */
export function programText({ name, version, build }) {
  return build === null ? `${name} ${version}` : `${name} ${version} (${build})`;
}

/** What to copy into a report of the failure. @param {Fault} fault @param {Program | null} program */
export function detailsText(fault, program) {
  const lines = [
    `code: ${fault.code}`,
    `message: ${fault.message}`,
    `where: ${placeText(fault.where) || "-"}`,
    `program: ${program === null ? "not started" : programText(program)}`,
    `browser: ${navigator.userAgent}`,
  ];
  if (fault.details) lines.push("", fault.details.trim());
  return lines.join("\n");
}
