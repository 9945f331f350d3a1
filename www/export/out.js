/** Text to the clipboard, files to the disk. */

/** Copies by way of a field, where the clipboard may not be written. @param {string} text */
function copyBySelection(text) {
  const field = document.createElement("textarea");
  field.value = text;
  const focused = document.activeElement;
  document.body.append(field);
  field.select();
  const copied = document.execCommand("copy");
  field.remove();
  if (focused instanceof HTMLElement) focused.focus();
  return copied;
}

/** @param {string} text @returns {Promise<boolean>} */
export async function copyText(text) {
  try {
    await navigator.clipboard.writeText(text);
    return true;
  } catch {
    return copyBySelection(text);
  }
}

/** @param {Blob} blob @param {string} name */
export function saveBlob(blob, name) {
  const link = document.createElement("a");
  const address = URL.createObjectURL(blob);
  link.href = address;
  link.download = name;
  link.click();
  // The download reads the address after this turn.
  setTimeout(() => URL.revokeObjectURL(address), 60_000);
}
