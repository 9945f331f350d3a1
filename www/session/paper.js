/**
 * What a report is made of, asked of the engine one by one: of each decomposition its files and its head, of chosen maps
 * their numbers, regions and notes, and the methods of it all.
 *
 * @typedef {"summary" | "maps" | "methods" | "notes"} ReportPart
 * @typedef {{ maps: number[], parts: ReportPart[], explained: boolean }} ReportWish `explained`: other explanations are looked for
 * @typedef {{ index: number, sheet: Sheet | null, trust: Trust | null, alternatives: Alternatives | null, note: TechnicalRecord | null }} ReportedMap
 * @typedef {{ id: number, name: string, subject: string, answer: Answer, preamble: InwardReport, head: Sheet["head"] | null }} ReportedTable under its outward name
 * @typedef {{ program: Program | null, date: Date, threshold: number, columns: TableColumn[], tables: ReportedTable[], own: ReportedTable,
 *             maps: ReportedMap[], summary: Summary | null, methods: Methods | null, parts: ReportPart[], alone: boolean }} ReportedWork
 */

import { freshMaps } from "./decompositions.js";
import { askHelper, explainedOf } from "./explanations.js";
import { outwardNames } from "./outward.js";

/** @import { Pool } from "../engine/pool/pool.js" */
/** @import { Beyond } from "./beyond.js" */

/** Maps that a report has at most: each is a page or two. */
export const MOST_REPORTED = 100;

/** How often it is looked whether what is waited for is there. */
const LOOK_MS = 100;

/**
 * @param {{ read: () => SessionState }} store
 * @param {() => Pool | null} pool
 * @param {{ given: () => GivenPopulations | null, known: () => number[], summary: (at: number[]) => Promise<Summary | null>, beyond: Beyond }} session
 *   `given`: reference populations; `known`: maps whose other explanations are known
 */
export function makePaper(store, pool, { given, known, summary, beyond }) {
  /** The last report that was asked for. */
  let run = 0;

  /** Files of the current decomposition under their outward names. */
  const filesHere = () => outwardNames(store.read()).told.get(store.read().current) ?? {};

  /** What was done beyond fitting. @param {boolean} alternatives @returns {Done} */
  function doneWith(alternatives) {
    const { decompositions, threshold, populations } = store.read();
    const { influence, whatIf } = explainedOf(store.read());
    const answered = decompositions.filter(({ answer }) => answer !== null);
    const drawn = given() !== null && populations !== null;
    return {
      region: true,
      populations: drawn,
      verdict: drawn,
      alternatives,
      influence: influence !== null,
      what_if: whatIf !== null,
      course: true,
      shares: answered.reduce((sum, { answer }) => sum + (answer?.count ?? 0), 0) > 1,
      threshold,
      ...beyond.told(),
      decompositions: answered.length,
      subjects: new Set(answered.map(({ subject }) => subject).filter((one) => one !== "")).size,
    };
  }

  return {
    /** Gives up a report that is being made. */
    stopPaper() {
      run++;
      pool()?.giveUp("alternatives");
    },

    /** Methods of the present answer, to be pasted into a paper. @returns {Promise<Methods | null>} */
    async methods() {
      const { answer } = store.read();
      if (answer === null) return null;
      return pool()?.ask({ kind: "methods", key: answer.key, names: filesHere(), done: doneWith(known().length > 0) }) ?? null;
    },

    /** The technical note on the map in view. @returns {Promise<TechnicalRecord | null>} */
    async note() {
      const { answer } = store.read();
      if (answer === null) return null;
      const { key, chosen: index } = answer;
      return pool()?.ask({ kind: "record", key, names: filesHere(), index, done: doneWith(known().includes(index)), populations: given() }) ?? null;
    },

    /**
     * Null where it was given up or the answer has become another one.
     * @param {ReportWish} wish
     * @param {(step: FitProgress) => void} take
     * @returns {Promise<ReportedWork | null>}
     */
    async paper({ maps, parts, explained }, take) {
      const own = ++run;
      const engine = pool();
      const { answer, decompositions, current, program, threshold, columns } = store.read();
      if (engine === null || answer === null) return null;
      const { key } = answer;
      const isStill = () => own === run && store.read().answer?.key === key;
      // A verdict of some of the draws would be another one each time.
      for (;;) {
        const { populations } = store.read();
        if (!isStill()) return null;
        if (populations?.state === "done" || populations?.state === "stopped") break;
        take({ done: 0, total: maps.length });
        await new Promise((wake) => setTimeout(wake, LOOK_MS));
      }
      const populations = given();
      const answered = decompositions.flatMap((one) => (one.answer === null ? [] : [{ ...one, answer: one.id === current ? answer : one.answer }]));
      /** @type {ReportedTable[]} */
      const tables = [];
      const { told: files, decompositions: labels } = outwardNames(store.read());
      for (const { id, answer: held } of answered) {
        const first = freshMaps(held).findIndex((map) => "rv" in map);
        /** @type {Sheet | null} */
        const sheet = first < 0 ? null : await engine.ask({ kind: "sheet", key: held.key, index: first });
        const preamble = await engine.ask({ kind: "preamble", key: held.key, names: files.get(id) ?? {} });
        tables.push({ id, name: "", subject: "", ...labels.get(id), answer: held, preamble, head: sheet?.head ?? null });
        if (!isStill()) return null;
      }
      /** @type {ReportedMap[]} */
      const told = [];
      for (const index of maps) {
        take({ done: told.length, total: maps.length });
        const fitted = "rv" in answer.maps[index];
        const looked = fitted && (explained || known().includes(index));
        /** @type {ReportedMap} */
        const one = { index, sheet: null, trust: null, alternatives: null, note: null };
        if (fitted) one.sheet = await engine.ask({ kind: "sheet", key, index });
        if (fitted && isStill()) one.trust = await engine.ask({ kind: "trust", key, index, populations });
        if (looked && isStill()) one.alternatives = await askHelper(engine, { kind: "alternatives", key, index, populations });
        if (parts.includes("notes") && isStill()) {
          one.note = await engine.ask({ kind: "record", key, names: filesHere(), index, done: doneWith(looked), populations });
        }
        if (!isStill()) return null;
        told.push(one);
      }
      const shares = answered.length > 1 || answer.count > 1 ? await summary([threshold]) : null;
      /** @type {Methods | null} */
      const methods = parts.includes("methods")
        ? await engine.ask({ kind: "methods", key, names: filesHere(), done: doneWith(told.some(({ alternatives }) => alternatives !== null)) })
        : null;
      if (!isStill()) return null;
      const at = answered.findIndex(({ id }) => id === current);
      const alone = answered.length < 2;
      return { program, date: new Date(), threshold, columns, tables, own: tables[at], maps: told, summary: shares, methods, parts, alone };
    },
  };
}
