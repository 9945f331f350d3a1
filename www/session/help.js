/** Which settings may help after an error of the engine, by its code. */

const COLUMNS = ["columns.label", "columns.x", "columns.y", "columns.z"];

/** @type {Record<string, string[]>} */
const HELP = {
  "input-encoding": ["encoding"],
  "table-ragged": ["delimiter", "decimal", "role"],
  "table-columns": ["role", "orientation", "delimiter", ...COLUMNS],
  "number-expected": ["role", "decimal", "delimiter", "orientation", ...COLUMNS],
  "column-unknown": [...COLUMNS, "label"],
  "shape-unmatched": ["orientation", "role"],
  "files-several": ["role", "mapsAre"],
  "maps-missing": ["role"],
  "units-unrecognised": ["units", "angles.polar", "angles.unit", ...COLUMNS],
  "electrode-off": ["units", ...COLUMNS],
  "electrodes-coincident": ["angles.polar", "angles.unit", ...COLUMNS],
  "electrodes-collinear": COLUMNS,
  "electrodes-coplanar": ["angles.polar", "angles.unit", ...COLUMNS],
  "electrodes-too-few": ["orientation"],
  "electrodes-too-many": ["orientation", "role"],
  "maps-too-many": ["orientation"],
  "labels-unmatched": ["orientation", "label", "columns.label"],
  "label-duplicate": ["orientation", "label", "columns.label", "role"],
  "map-constant": ["orientation"],
  "map-laplacian": ["laplacian"],
  "unmixing-singular": ["mapsAre", "orientation", "role"],
};

/** Settings that are kept with each file. */
const OF_FILE = ["role", "encoding", "delimiter", "decimal", "label"];

/**
 * What may help, with its place in the settings and, where it is of one file, the file's name.
 * @param {Fault} fault
 * @param {string[]} names of all files
 * @returns {{ setting: string, path: string[], file: string | null }[]}
 */
export function helpFor({ code, message, where }, names) {
  // An error of one file is helped by what is said about that file.
  const named = where?.file?.split("/")[0] ?? "";
  if (named !== "" && !names.includes(named)) return [];
  const one = named !== "" && !["files-several", "maps-missing"].includes(code);
  const some = names.filter((name) => code !== "files-several" || message.includes(name));
  const files = one ? [where?.file ?? named] : some;
  return (HELP[code] ?? [])
    .filter((setting) => !COLUMNS.includes(setting) || where?.input !== "maps")
    .filter((setting) => setting !== "label" || where?.input !== "electrodes")
    .flatMap((setting) => {
      /** @type {(string | null)[]} */
      const about = OF_FILE.includes(setting) ? files : [null];
      return about.map((file) => ({ setting, path: file === null ? setting.split(".") : ["files", file, setting], file }));
    });
}

/** Whether a code says that a file is none that is read, whatever the settings. @param {string} code */
export function isUnreadable(code) {
  return /^(input|array|json)-/.test(code) && HELP[code] === undefined;
}

/** Whether two tables do not fit each other, each of which may be sound. @param {Fault | null} fault */
export function isMisfit(fault) {
  return fault !== null && ["labels-unmatched", "shape-unmatched"].includes(fault.code);
}
