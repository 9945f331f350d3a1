/** Which maps are listed, and in which order: filtered by residual variance and verdict, grouped, sorted. Without elements. */

/** Upper ends of the bands of residual variance; the last one has none. */
export const BANDS = [0.05, 0.1, 0.15, Infinity];

const REGIONS = ["front", "middle", "back"].flatMap((third) =>
  ["left", "midline", "right"].map((side) => `${third}-${side}`),
);

/** Verdicts, the most trusted first. @type {VerdictWord[]} */
export const VERDICTS = ["dipolar", "paired", "undecided", "not-dipolar", "edge", "below-the-brain", "lone-electrode"];

/** @typedef {"number" | "rv" | "depth" | "strength" | "region" | "verdict"} LedgerOrder */
/** @typedef {"verdict" | "band" | "region" | "none"} LedgerGrouping */
/** @typedef {{ order: LedgerOrder, grouping: LedgerGrouping, most: number, verdict: string }} LedgerView */
/** @typedef {VerdictWord | null | undefined} Verdict */
/** @typedef {{ code: string, indexes: number[] }} LedgerGroup */

/** @param {MapRow} row */
function regionAt(row) {
  const at = REGIONS.indexOf(row.region);
  return at < 0 ? REGIONS.length : at;
}

/** @param {Verdict} verdict */
function verdictRank(verdict) {
  return verdict ? VERDICTS.indexOf(verdict) : VERDICTS.length;
}

/** By what maps are sorted, the smallest first. @type {Record<LedgerOrder, (row: MapRow, verdict: Verdict) => number>} */
const KEYS = {
  number: () => 0,
  rv: (row) => row.rv,
  depth: (row) => row.depth_mm,
  strength: (row) => -row.strength,
  region: regionAt,
  verdict: (row, verdict) => verdictRank(verdict) + Math.min(0.999, row.rv),
};

/** @type {Record<LedgerGrouping, (row: MapRow, verdict: Verdict) => { rank: number, code: string }>} */
const GROUPINGS = {
  verdict: (_, verdict) => ({ rank: verdictRank(verdict), code: `verdict.${verdict ?? "none"}` }),
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
 * @param {Answer["verdicts"]} [verdicts]
 * @returns {LedgerGroup[]}
 */
export function ledgerOf(maps, { order, grouping, most, verdict }, verdicts = null) {
  /** @type {Map<number, LedgerGroup>} */
  const groups = new Map();
  /** @type {number[]} */
  const unfitted = [];
  /** @type {number[]} */
  const keys = [];
  maps.forEach((map, index) => {
    if (map === undefined) return;
    if ("error" in map && verdict === "") unfitted.push(index);
    if ("error" in map || map.rv > most) return;
    const own = verdicts?.[index];
    if (verdict !== "" && own !== verdict) return;
    keys[index] = KEYS[order](map, own);
    const { rank, code } = GROUPINGS[grouping](map, own);
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
