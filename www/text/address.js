/** Sentences on what the page's address asks for. */

/** @param {string[]} names */
const listed = (names) => `There are: ${names.join(", ")}.`;

/** @param {string} code @param {string} name as it was asked for @param {string[]} names that there are @returns {Fault} */
export function addressFault(code, name, names) {
  const asked = `“${name.slice(0, 60)}”`;
  const message = {
    "example-unknown": `The address asks for an invented map called ${asked}, and there is none.`,
    "view-unknown": `The address asks for a panel called ${asked}, and there is none.`,
    "view-absent": `The address asks for the panel ${asked}, which these maps do not have.`,
  }[code];
  const hint = code === "view-absent" ? "What there is of the answer is below." : `${listed(names)} Mend the address behind its #, or go on without.`;
  return { code, message: message ?? "", hint, where: null };
}
