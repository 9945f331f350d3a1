/**
 * The table of all maps as a file: fractions, millimetres and so on in full precision with a point for decimals, names
 * as they are. Text follows RFC 4180; a name that a spreadsheet might take for a formula has an apostrophe before it.
 */

/** @typedef {{ number: number, map: Answer["maps"][number], verdict: VerdictWord | null }} NumberedMap */
/** @typedef {{ code: string, of: (row: MapRow) => string | number | boolean | null }} RowField */

/** @param {MapUnit} unit @returns {RowField[]} */
export function rowFields(unit) {
  const [strength, variance] = unit === "relative" ? ["", ""] : ["_nAm", unit === "uV" ? "_uV2" : "_V2"];
  return [
    { code: "rv", of: (row) => row.rv },
    { code: "adjusted_rv", of: (row) => row.adjusted_rv },
    { code: "degrees_of_freedom", of: (row) => row.degrees_of_freedom },
    { code: "x_mm", of: (row) => row.canonical_mm[0] },
    { code: "y_mm", of: (row) => row.canonical_mm[1] },
    { code: "z_mm", of: (row) => row.canonical_mm[2] },
    { code: "direction_x", of: (row) => row.canonical_direction[0] },
    { code: "direction_y", of: (row) => row.canonical_direction[1] },
    { code: "direction_z", of: (row) => row.canonical_direction[2] },
    { code: "site", of: (row) => row.nearest_site },
    { code: "side", of: (row) => row.side },
    { code: "region", of: (row) => row.region },
    { code: "depth_mm", of: (row) => row.depth_mm },
    { code: "eccentricity", of: (row) => row.eccentricity },
    { code: `strength${strength}`, of: (row) => row.strength },
    { code: "radial_share", of: (row) => row.radial_share },
    { code: "at_boundary", of: (row) => row.at_boundary },
    { code: `variance${variance}`, of: (row) => row.variance },
    { code: "flipped", of: (row) => row.flipped },
  ];
}

/** Whether a spreadsheet may take a name for a formula; a number is none, nor are several with commas between. @param {string} name */
export function isFormula(name) {
  return /^[=+\-@\t\r]/.test(name) && !/^[+-]?\d+([.,]\d+)?(e[+-]?\d+)?(, [+-]?\d+(\.\d+)?)*$/.test(name);
}

/** @param {string} name */
export function guarded(name) {
  return isFormula(name) ? `'${name}` : name;
}

/** @param {string} text @param {string} delimiter */
function quoted(text, delimiter) {
  return /["\r\n]/.test(text) || text.includes(delimiter) ? `"${text.replaceAll('"', '""')}"` : text;
}

/**
 * @param {NumberedMap[]} maps
 * @param {MapUnit} unit
 * @param {string} delimiter
 */
export function rowsText(maps, unit, delimiter) {
  const fields = rowFields(unit);
  const heading = ["number", "name", ...fields.map(({ code }) => code), "verdict", "not_fitted"];
  const rows = maps.map(({ number, map, verdict }) => {
    const failed = "error" in map;
    const values = fields.map(({ of }) => (failed ? "" : String(of(map) ?? "")));
    return [String(number), guarded(map.name), ...values, verdict ?? "", failed ? guarded(map.error.message) : ""];
  });
  return [heading, ...rows].map((cells) => `${cells.map((cell) => quoted(cell, delimiter)).join(delimiter)}\r\n`).join("");
}

/** @param {NumberedMap[]} maps @param {MapUnit} unit @param {Program | null} program */
export function rowsJson(maps, unit, program) {
  const fields = rowFields(unit);
  const rows = maps.map(({ number, map, verdict }) => ({
    number,
    name: map.name,
    ...Object.fromEntries(fields.map(({ code, of }) => [code, "error" in map ? null : of(map)])),
    verdict,
    not_fitted: "error" in map ? map.error.message : null,
  }));
  const lines = rows.map((row) => `    ${JSON.stringify(row)}`).join(",\n");
  return `{\n  "format": "inward-table",\n  "version": 1,\n  "program": ${JSON.stringify(program)},\n  "maps": [\n${lines}\n  ]\n}\n`;
}
