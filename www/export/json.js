/**
 * The report as JSON text in parts: everything before the maps, one map a line, everything after.
 * A table of many thousand maps never becomes one string.
 */

/** @param {InwardReport} report @param {"before" | "after"} side */
function keysBeside(report, side) {
  const keys = Object.keys(report);
  const at = keys.indexOf("maps");
  return side === "before" ? keys.slice(0, at) : keys.slice(at + 1);
}

/** @param {InwardReport} report @param {string[]} keys */
function jsonLines(report, keys) {
  return keys.map((key) => `  ${JSON.stringify(key)}: ${JSON.stringify(/** @type {any} */ (report)[key])}`);
}

/** @param {InwardReport} preamble */
export function reportHead(preamble) {
  return `{\n${[...jsonLines(preamble, keysBeside(preamble, "before")), '  "maps": ['].join(",\n")}\n`;
}

/** @param {ReportMap} map @param {boolean} first */
export function reportMap(map, first) {
  return `${first ? "" : ",\n"}    ${JSON.stringify(map)}`;
}

/** @param {InwardReport} preamble */
export function reportTail(preamble) {
  return `\n${["  ]", ...jsonLines(preamble, keysBeside(preamble, "after"))].join(",\n")}\n}\n`;
}

/** A comparison, one decomposition a line. @param {object} report */
export function comparisonParts(report) {
  const parts = Object.entries(report).map(([key, value]) => {
    const list = Array.isArray(value) ? value.map((one) => `    ${JSON.stringify(one)}`).join(",\n") : null;
    return `  ${JSON.stringify(key)}: ${list === null ? JSON.stringify(value) : list === "" ? "[]" : `[\n${list}\n  ]`}`;
  });
  return ["{\n", ...parts.flatMap((part, at) => (at === 0 ? [part] : [",\n", part])), "\n}\n"];
}
