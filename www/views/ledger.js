/** Which maps are listed, and in which order: filtered by residual variance, grouped, sorted. Without elements. */

/** Upper ends of the bands of residual variance; the last one has none. */
export const BANDS = [0.05, 0.1, 0.15, Infinity];

const REGIONS = ["front", "middle", "back"].flatMap((third) =>
  ["left", "midline", "right"].map((side) => `${third}-${side}`),
);

/** @typedef {"number" | "rv" | "depth" | "strength" | "region"} LedgerOrder */
/** @typedef {"band" | "region" | "none"} LedgerGrouping */
/** @typedef {{ order: LedgerOrder, grouping: LedgerGrouping, most: number }} LedgerView */
/** @typedef {{ code: string, indexes: number[] }} LedgerGroup */

/** @param {MapRow} row */
function regionAt(row) {
  const at = REGIONS.indexOf(row.region);
  return at < 0 ? REGIONS.length : at;
}

/** By what maps are sorted, the smallest first. @type {Record<LedgerOrder, (row: MapRow) => number>} */
const KEYS = {
  number: () => 0,
  rv: (row) => row.rv,
  depth: (row) => row.depth_mm,
  strength: (row) => -row.strength,
  region: regionAt,
};

/** @type {Record<LedgerGrouping, (row: MapRow) => { rank: number, code: string }>} */
const GROUPINGS = {
  band(row) {
    const rank = BANDS.findIndex((end) => row.rv <= end);
    return { rank, code: `band.${rank}` };
  },
  region: (row) => ({ rank: regionAt(row), code: row.region }),
  none: () => ({ rank: 0, code: "" }),
};

/**
 * @param {Answer["maps"]} maps
 * @param {LedgerView} view
 * @returns {LedgerGroup[]}
 */
export function ledgerOf(maps, { order, grouping, most }) {
  /** @type {Map<number, LedgerGroup>} */
  const groups = new Map();
  /** @type {number[]} */
  const unfitted = [];
  /** @type {number[]} */
  const keys = [];
  maps.forEach((map, index) => {
    if (map === undefined) return;
    if ("error" in map) unfitted.push(index);
    if ("error" in map || map.rv > most) return;
    keys[index] = KEYS[order](map);
    const { rank, code } = GROUPINGS[grouping](map);
    const group = groups.get(rank);
    if (group === undefined) groups.set(rank, { code, indexes: [index] });
    else group.indexes.push(index);
  });
  const listed = [...groups].sort(([one], [other]) => one - other).map(([, group]) => group);
  for (const { indexes } of listed) indexes.sort((a, b) => keys[a] - keys[b] || a - b);
  /** @param {number} index */
  const reason = (index) => /** @type {UnfittedMap} */ (maps[index]).error.code;
  unfitted.sort((a, b) => reason(a).localeCompare(reason(b)) || a - b);
  if (unfitted.length > 0) listed.push({ code: "unfitted", indexes: unfitted });
  return listed;
}

/** How many maps there are by now, how many are fitted, and how many of these have at most so much residual variance. @param {Answer["maps"]} maps @param {number} most */
export function countsOf(maps, most) {
  let [here, fitted, within] = [0, 0, 0];
  for (const map of maps) {
    if (map === undefined) continue;
    here++;
    if ("error" in map) continue;
    fitted++;
    if (map.rv <= most) within++;
  }
  return { here, fitted, within };
}
