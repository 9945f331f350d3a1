/** Near-dipolar shares as lines to draw and as tables of text, for the page and for reports. */

import { freshMaps } from "../session/decompositions.js";
import { shortName } from "../text/figures.js";
import { shareAtText, word } from "../text/words.js";
import { seriesOf } from "./several.js";

/** @import { ShareLine } from "../draw/curves.js" */

/** What decompositions are called instead of by their names, by their ids. @typedef {Map<number, { name: string, subject: string }>} Labels */

/** `id` of the decomposition, or of a group's first. @typedef {ShareLine & { id: number, information: number | null }} NamedLine */

/** @param {Summary["members"][number]} member @param {SessionState} state */
function decompositionOf(member, { decompositions }) {
  return decompositions.find(({ name, subject }) => name === member.name && subject === (member.subject ?? ""));
}

/**
 * A line for each group of one name and several subjects, and for each decomposition that is in none.
 * @param {Summary} held
 * @param {SessionState} state
 * @param {Labels} [labels]
 * @returns {NamedLine[]}
 */
export function shareLines({ members, groups }, state, labels) {
  const series = seriesOf(state);
  return members.flatMap((member, index) => /** @type {NamedLine[]} */ (lineOf(member, index)));

  /** @param {Summary["members"][number]} member @param {number} index */
  function lineOf(member, index) {
    const decomposition = decompositionOf(member, state);
    if (decomposition === undefined || member.fitted === 0) return [];
    const at = series.get(decomposition.id) ?? 0;
    const { name, subject } = labels?.get(decomposition.id) ?? decomposition;
    const group = groups.find((one) => one.members.includes(index));
    if (group !== undefined) {
      const first = group.members.find((one) => members[one].fitted > 0) === index;
      return first ? [{ id: decomposition.id, name: shortName(name), at, ...group.curve, steps: false, information: group.information }] : [];
    }
    const rv = freshMaps(decomposition.answer).flatMap((map) => ("rv" in map ? [map.rv] : [])).sort((a, b) => a - b);
    const share = rv.map((_, k) => (k + 1) / rv.length);
    const { information } = decomposition;
    const whole = [name, subject].filter((part) => part).map(shortName).join(", ");
    return [{ id: decomposition.id, name: whole, at, rv, share, low: null, high: null, steps: true, information }];
  }
}

/** @typedef {{ id: string, heading: string[], rows: string[][], at: (number | undefined)[] }} ShareTable */

/**
 * The tables as text, the first cell of a row naming it; `at` gives each row's line. A column without anything in it
 * is left out.
 * @param {Summary} held
 * @param {SessionState} state
 * @param {Labels} [labels]
 * @returns {ShareTable[]}
 */
export function shareTables({ labels: limits, members, groups, differences }, state, labels) {
  const limit = shareAtText(Number(limits[0]) / 100);
  const series = seriesOf(state);
  const own = members.map((member) => decompositionOf(member, state));
  const at = own.map((one) => series.get(one?.id ?? 0));
  const names = own.map((one) => (one === undefined ? { name: "", subject: "" } : (labels?.get(one.id) ?? one)));
  /** @param {number} group */
  const groupName = (group) => shortName(names[groups[group].members[0]].name);
  /** @type {ShareTable[]} */
  const all = [
    {
      id: "group-table",
      heading: ["decomposition", "shares.subjects", limit, "shares.interval", "shares.median"],
      rows: groups.map(({ cells }, group) => [groupName(group), ...cells]),
      at: groups.map((group) => at[group.members[0]]),
    },
    {
      id: "share-table",
      heading: ["decomposition", "subject", "shares.fitted", limit, "shares.share", "shares.weighted", "shares.median"],
      rows: members.map(({ cells }, member) => [shortName(names[member].name), shortName(names[member].subject), ...cells]),
      at,
    },
    {
      id: "difference-table",
      heading: ["shares.pair", "shares.subjects", "shares.difference", "shares.interval"],
      rows: differences.map(({ a, b, cells }) => [`${groupName(a)} \u2212 ${groupName(b)}`, ...cells]),
      at: [],
    },
  ];
  return all.map((table) => {
    const kept = table.heading.map((_, k) => k === 0 || table.rows.some((row) => row[k] !== ""));
    /** @param {string[]} cells */
    const keep = (cells) => cells.filter((_, k) => kept[k]);
    const heading = table.heading.map((text) => (text === limit ? text : word(text)));
    return { ...table, heading: keep(heading), rows: table.rows.map(keep) };
  });
}
