/** What stands behind the # of the page's address. It is read, never written. */

/** No coding of it is an error; what is no name with a value is a place in the page, and the browser's business. */
export function askedByAddress() {
  return new URLSearchParams(new URL(document.URL).hash.slice(1));
}
