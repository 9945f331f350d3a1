/** The whole page takes drops; text pasted outside of a field is taken too. */

import { inputOfFile } from "./files.js";

/** @import { Session } from "../session/session.js" */

/** @param {DataTransfer | null} transfer @returns {(Input | Promise<Input>)[]} */
function inputsOfTransfer(transfer) {
  if (transfer === null) return [];
  const text = transfer.getData("text/plain");
  if (transfer.files.length > 0) return [...transfer.files].map(inputOfFile);
  return text.trim() === "" ? [] : [{ name: "", content: text }];
}

/** @param {Session} session @param {DataTransfer | null} transfer */
async function takeTransfer(session, transfer) {
  try {
    await session.add(inputsOfTransfer(transfer));
  } catch (error) {
    session.fail(error);
  }
}

/** @param {EventTarget | null} target */
export function isTextField(target) {
  return target instanceof HTMLElement && target.matches("textarea, input[type=number], input[type=text]");
}

/**
 * @param {Session} session
 * @param {HTMLElement} overlay shown while something is held over the page
 */
export function takeDropsAndPastes(session, overlay) {
  /** Text moved about in a field is the field's business. @param {DragEvent} event */
  const isOwnText = (event) => isTextField(event.target) && !event.dataTransfer?.types.includes("Files");
  /** @param {DragEvent} event */
  const hover = (event) => {
    if (isOwnText(event)) return;
    event.preventDefault();
    overlay.hidden = false;
  };
  document.addEventListener("dragenter", hover);
  document.addEventListener("dragover", hover);
  document.addEventListener("dragleave", (event) => {
    if (event.relatedTarget === null) overlay.hidden = true;
  });
  document.addEventListener("drop", (event) => {
    if (isOwnText(event)) return;
    event.preventDefault();
    overlay.hidden = true;
    takeTransfer(session, event.dataTransfer);
  });
  document.addEventListener("paste", (event) => {
    if (isTextField(event.target)) return;
    event.preventDefault();
    takeTransfer(session, event.clipboardData);
  });
}
