/**
 * Reference populations, drawn in pieces by workers that have no map to fit. Draw k of a kind is the same whoever makes it,
 * so that the pieces may come in any order and from anyone.
 *
 * @typedef {{ kind: PopulationKind, first: number, last: number, tries: number }} DrawnPiece
 * @typedef {{ key: number, bytes: number, size: number, next: Record<PopulationKind, number>, again: DrawnPiece[], running: number,
 *             drawn: (kind: PopulationKind, first: number, numbers: Float64Array) => void,
 *             resolve: (value: null) => void, reject: (fault: Fault) => void }} DrawJob
 */

import { POPULATION_KINDS } from "../kinds.js";
import { LARGE_BYTES } from "./client.js";
import { LOST, makeSilence, MOST_TRIES } from "./faults.js";

/** @import { Member } from "./schedule.js" */

/** How long a piece takes: of the worker that is asked by hand, and of a helper. */
const FRONT_MS = 40;
const ASIDE_MS = 100;

/** Draws of a piece, and of the first one of a kind. */
const DRAWS = { least: 16, most: 4096, first: 64 };

/** @param {Member[]} members */
export function makeDrawing(members) {
  /** @type {DrawJob | null} */
  let job = null;
  /** Milliseconds for a draw of each kind, as they were last. @type {Partial<Record<PopulationKind, number>>} */
  const speeds = {};

  /** @param {DrawJob} present @param {number} milliseconds @returns {DrawnPiece | null} */
  function nextPiece({ next, size, again }, milliseconds) {
    const lost = again.shift();
    if (lost !== undefined) return lost;
    // All kinds grow together.
    const [kind] = [...POPULATION_KINDS].sort((a, b) => next[a] - next[b]);
    const first = next[kind];
    if (first >= size) return null;
    const speed = speeds[kind];
    const draws = speed === undefined ? DRAWS.first : Math.round(milliseconds / speed / 16) * 16;
    const last = Math.min(size, first + Math.min(DRAWS.most, Math.max(DRAWS.least, draws)));
    next[kind] = last;
    return { kind, first, last, tries: 0 };
  }

  /** @param {Member} member @param {DrawJob} present @param {DrawnPiece} piece */
  async function draw(member, present, piece) {
    const { client } = member;
    const { kind, first, last } = piece;
    const since = performance.now();
    present.running++;
    const asked = client.ask({ kind: "population", key: present.key, population: kind, first, last });
    const silence = makeSilence(client);
    silence.listen();
    try {
      /** @type {Float64Array} */
      const numbers = await asked;
      speeds[kind] = (performance.now() - since) / (last - first);
      if (job === present) present.drawn(kind, first, numbers);
    } catch (error) {
      const fault = /** @type {Fault} */ (error);
      const lost = LOST.includes(fault.code) && client.hasAnswered();
      // A helper that cannot be started leaves its draws to the others.
      const gone = fault.code === "worker-unavailable" && member !== members[0];
      if (gone) member.gone = true;
      // What was given up for another reason is drawn again as long as it is wanted.
      if (gone || fault.code === "given-up" || (lost && piece.tries + 1 < MOST_TRIES)) {
        present.again.push({ ...piece, tries: piece.tries + Number(lost) });
      } else if (job === present) {
        job = null;
        present.reject(fault);
      }
    } finally {
      silence.end();
      present.running--;
      const over = present.running === 0 && present.again.length === 0 && POPULATION_KINDS.every((one) => present.next[one] >= present.size);
      if (job === present && over) {
        job = null;
        present.resolve(null);
      }
    }
  }

  return {
    /** Gives a worker something to draw. @param {Member} member @returns {Promise<void> | null} null where there is nothing */
    begin(member) {
      const front = member === members[0];
      // A helper that reads a large table holds it.
      if (job === null || (job.bytes >= LARGE_BYTES && !front)) return null;
      // What is asked by hand comes first; when it is answered, work is given out anew.
      if (member.client.waitsFor() > 0) return null;
      const piece = nextPiece(job, front ? FRONT_MS : ASIDE_MS);
      return piece === null ? null : draw(member, job, piece);
    },

    /** @param {Pick<DrawJob, "key" | "bytes" | "size" | "drawn">} wanted @param {Record<PopulationKind, number>} from how many there are of each kind */
    start(wanted, from) {
      this.stop();
      return new Promise((resolve, reject) => {
        job = { ...wanted, next: { ...from }, again: [], running: 0, resolve, reject };
      });
    },

    /** What is being drawn is dropped, for one study or whichever it is. @param {number} [key] */
    stop(key) {
      const present = job;
      if (present === null || (key !== undefined && key !== present.key)) return;
      job = null;
      present.reject({ code: "given-up", message: "", where: null, hint: "" });
    },
  };
}
