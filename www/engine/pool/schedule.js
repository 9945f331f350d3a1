/**
 * Tables whose maps are fitted, in pieces that are given to whichever worker is free. A worker that is lost or trapped
 * loses the maps it has not yet told; another fits them.
 *
 * @typedef {{ first: number, last: number | null, tries: number }} Piece from one map up to another, null up to the end
 * @typedef {{ client: WorkerClient, busy: boolean, gone: boolean }} Member the first is the one that is asked by hand
 * @typedef {{ key: number, rank: () => number, bytes: number, count: number | null, pieces: Piece[], running: Set<Piece>,
 *             speed: number, opened: (study: OpenedStudy) => void, fitted: (first: number, maps: MapSummary[]) => void,
 *             resolve: (value: null) => void, reject: (fault: Fault) => void }} Job
 */

import { LARGE_BYTES } from "./client.js";
import { makeDrawing } from "./drawing.js";
import { LOST, makeSilence, MOST_TRIES } from "./faults.js";

/** @import { WorkerClient } from "./client.js" */

/** A table up to this length is fitted by one worker: another would take as long to read it. */
const WHOLE = 160;

/** Maps that a worker is given of a longer table: as many as take so long, between these. */
const PIECE_MS = 100;
const PIECES = { least: 64, most: 2048 };

/** Files that the worker which is asked by hand opens for other decompositions: it must not be long at it. */
const BRIEF_BYTES = 2 ** 20;

/** @param {Member[]} members */
export function makeSchedule(members) {
  /** @type {Set<Job>} */
  const jobs = new Set();
  /** What workers do that have no map to fit. */
  const drawing = makeDrawing(members);

  /** @param {Job} job @param {Fault | null} fault */
  function end(job, fault) {
    if (!jobs.delete(job)) return;
    // The current one's tables stay with all workers: the next change of settings need not send them again.
    if (job.rank() > 0) for (const { client } of members) client.release(job.key);
    if (fault === null) job.resolve(null);
    else job.reject(fault);
  }

  /** Whether a worker may fit for a table. @param {Job} job @param {Member} member */
  function suits(job, member) {
    const at = members.indexOf(member);
    if (at === 0) return job.rank() === 0 || job.bytes < BRIEF_BYTES || members.slice(1).every(({ gone }) => gone);
    // Each worker that reads a large table holds it; a table being opened for the page is in the first one's hands.
    return job.bytes < LARGE_BYTES || at === 1;
  }

  /** The next maps of a table. @param {Job} job @returns {Piece | null} */
  function nextPiece(job) {
    const rest = job.pieces.shift();
    if (rest === undefined) return null;
    const fitting = job.speed === 0 ? 0 : Math.round(PIECE_MS / job.speed / 16) * 16;
    // Towards the end pieces get short, so that all workers end together.
    const left = [rest, ...job.pieces].reduce((sum, { first, last }) => sum + (last ?? first) - first, 0);
    const share = Math.ceil(left / members.length / 32) * 16;
    const size = Math.min(PIECES.most, Math.max(PIECES.least, Math.min(fitting, share)));
    // Of an unknown length: the first ones, and the rest when the length is told.
    const whole = job.count !== null && job.count <= WHOLE;
    const length = job.count === null ? WHOLE : size;
    if (whole || (rest.last !== null && rest.last - rest.first <= length)) return rest;
    if (job.count !== null) job.pieces.unshift({ ...rest, first: rest.first + length });
    return { ...rest, last: rest.first + length };
  }

  function dispatch() {
    const order = [...jobs].sort((a, b) => a.rank() - b.rank());
    for (const member of members) {
      if (member.busy || member.gone) continue;
      // What has not been opened is opened once.
      const job = order.find((one) => one.pieces.length > 0 && suits(one, member) && (one.count !== null || one.running.size === 0));
      const piece = job === undefined ? null : nextPiece(job);
      if (job !== undefined && piece !== null) give(member, job, piece);
      else drawn(member, drawing.begin(member));
    }
  }

  /** @param {Member} member @param {Promise<void> | null} piece */
  async function drawn(member, piece) {
    if (piece === null) return;
    member.busy = true;
    await piece;
    member.busy = false;
    dispatch();
  }

  /** @param {Member} member @param {Job} job @param {Piece} piece */
  async function give(member, job, piece) {
    const { client } = member;
    member.busy = true;
    job.running.add(piece);
    let heard = false;
    const silence = makeSilence(client);
    let since = performance.now();
    /** @param {PieceProgress} step */
    const take = (step) => {
      // Opening a large table takes as long as it takes.
      silence.listen();
      if (!jobs.has(job)) return;
      if ("study" in step) {
        if (heard || job.count !== null) return;
        heard = true;
        job.count = step.study.count;
        if (piece.last !== null && piece.last < job.count) job.pieces.push({ first: piece.last, last: job.count, tries: 0 });
        piece.last = Math.min(piece.last ?? job.count, job.count);
        since = performance.now();
        job.opened(step.study);
        dispatch();
      } else {
        const now = performance.now();
        const each = (now - since) / step.maps.length;
        job.speed = job.speed === 0 ? each : (job.speed + each) / 2;
        since = now;
        // A worker that was started afresh begins its piece again.
        const fresh = step.maps.slice(Math.max(0, piece.first - step.first));
        if (fresh.length === 0) return;
        const { first } = piece;
        piece.first += fresh.length;
        job.fitted(first, fresh);
      }
    };
    const opening = job.count === null;
    try {
      await client.ask({ kind: "fit", key: job.key, first: piece.first, last: piece.last, opening }, take);
      job.running.delete(piece);
      if (job.pieces.length === 0 && job.running.size === 0) end(job, null);
    } catch (error) {
      const fault = /** @type {Fault} */ (error);
      job.running.delete(piece);
      if (fault.code === "worker-unavailable" && members.indexOf(member) > 0) member.gone = true;
      const again = LOST.includes(fault.code) && piece.tries + 1 < MOST_TRIES && (member !== members[0] || client.hasAnswered());
      if (jobs.has(job) && again) job.pieces.unshift({ ...piece, tries: piece.tries + 1 });
      else end(job, fault);
    } finally {
      silence.end();
      member.busy = false;
      dispatch();
    }
  }

  return {
    /**
     * Fits maps of a named table; rank 0 is fitted before all others, and its study is kept.
     * @param {Pick<Job, "key" | "rank" | "bytes" | "count" | "opened" | "fitted">} wanted
     * @param {{ first: number, last: number | null }[]} ranges
     * @returns {Promise<null>}
     */
    fit(wanted, ranges) {
      return new Promise((resolve, reject) => {
        const pieces = ranges.map((range) => ({ ...range, tries: 0 }));
        jobs.add({ ...wanted, pieces, running: new Set(), speed: 0, resolve, reject });
        dispatch();
      });
    },

    dispatch,

    /** @type {typeof drawing.start} draws behind all fits; a second call takes the place of the first */
    draw(wanted, from) {
      const all = drawing.start(wanted, from);
      dispatch();
      return all;
    },

    stopDrawing: () => drawing.stop(),

    /** Whether maps of a table are being fitted. @param {number} key */
    has: (key) => [...jobs].some((job) => job.key === key),

    /** Drops what is still to be fitted of a table. @param {number} key */
    drop(key) {
      drawing.stop(key);
      for (const job of jobs) {
        if (job.key !== key) continue;
        jobs.delete(job);
        job.reject({ code: "given-up", message: "", where: null, hint: "" });
      }
    },

    /** Ends all work at once: workers that are at it are ended with it. */
    cancel() {
      for (const { key } of [...jobs]) {
        this.drop(key);
        for (const { client } of members) client.giveUp(key);
      }
    },
  };
}
