/** Sentences between the page and the page around it. */

import { harmless } from "./figures.js";

/** Names of files that are told one by one. */
const NAMED = 3;

/** @type {Record<string, string>} */
export const HOST_WORDS = {
  host: "The page around this one",
  "host.decline": "No",
  "host.stop": "Stop",
  "host.handed": "Handed over.",
  "host.taken": "Taken.",
};

/** What is told to the page around, by code. @type {Record<string, [string, string]>} */
const REFUSALS = {
  "message-malformed": ["This part of the message is not as the protocol has it.", "See the table of messages in the README, “In a wiki”."],
  "version-unknown": ["Messages of another version than 1 are not understood.", "Send inward: 1."],
  "kind-unknown": ["There is no message of this kind.", "Send data or report-wanted."],
  "data-large": ["This is more than is taken at once: 200 files, 64 MiB.", "Send less."],
  "setting-unknown": ["This setting cannot be given from outside.", "Leave it to the person, or send mapUnit, polarity or exclude."],
  declined: ["The person said no.", "Ask again when they want it."],
  superseded: ["A later message of the same kind has taken its place.", "Wait for an answer before you send another."],
  "report-failed": ["No report was made.", "Ask again when the page shows an answer."],
};

/** @param {{ code: string, where?: string }} refusal */
export function refusalText({ code, where = "" }) {
  const [message, hint] = REFUSALS[code];
  return { kind: "refused", code, where, message, hint };
}

/** @param {string} given @returns {Fault} */
export function hostFault(given) {
  return {
    code: "host-invalid",
    message: `The address names “${harmless(given.slice(0, 60))}” as the page around this one, and that is no origin this page could talk to. It talks to none.`,
    hint: "Behind host= belongs how the address of the page around begins, up to its name and port, without a path; http or https only. Pages from files and within sandboxed frames have no origin (null).",
    where: null,
  };
}

/** @param {string} origin @param {boolean} stopped */
export function hostText(origin, stopped) {
  if (stopped) return `Stopped: nothing goes to ${origin} any more, and nothing is taken from it. Reload this page to begin again.`;
  return `This page is embedded. What you hand over goes to ${origin}, and nothing goes without your click.`;
}

/** @param {string} origin @param {File[]} files */
export function offerText(origin, files) {
  const names = files.slice(0, NAMED).map(({ name }) => harmless(name));
  const rest = files.length - names.length;
  return `${origin} offers ${names.join(", ")}${rest > 0 ? ` and ${rest} more` : ""}.`;
}

/** @param {string} origin @param {boolean} answered @param {boolean} named */
export function wantedText(origin, answered, named) {
  const what = answered ? "the report of the answer shown" : "the report; there is no answer yet";
  return `${origin} asks for ${what}${answered ? `. Names of files are ${named ? "in it" : "left out"}` : ""}.`;
}

/** @param {string} origin */
export const takeText = (origin) => `Take the data of ${origin}`;

/** @param {string} origin */
export const handOverText = (origin) => `Hand the report over to ${origin}`;
