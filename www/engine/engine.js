/**
 * The engine as scripts see it, over a wasm instance that may trap.
 *
 * Anything the engine throws on purpose carries a `code`. Anything else (a trap, an exhausted stack or memory)
 * leaves the instance in an unknown state: it is dropped, and the next call gets a fresh one.
 */

import { lacksMemory } from "./fault.js";
import { unpackedRow } from "./row.js";

/** @param {unknown} error @returns {error is Error & Fault} */
function isDeliberate(error) {
  return error instanceof Error && typeof (/** @type {any} */ (error).code) === "string";
}

/**
 * @param {string} code
 * @param {string} message
 * @param {string} hint
 * @param {string} [details]
 */
function engineError(code, message, hint, details) {
  return Object.assign(new Error(message), { code, where: null, hint, details });
}

/**
 * The caller may change its bytes afterwards; a study that reopens must not see that.
 * @param {InwardContent} content
 */
function keepContent(content) {
  return content instanceof Uint8Array ? content.slice() : content;
}

/** @param {EngineRequest} request @returns {EngineRequest} */
function keepRequest(request) {
  const kept = { ...request };
  if (kept.electrodes !== undefined) kept.electrodes = keepContent(kept.electrodes);
  if (kept.maps !== undefined) kept.maps = keepContent(kept.maps);
  if (kept.files !== undefined) {
    kept.files = kept.files.map(({ name, content }) => ({ name, content: keepContent(content) }));
  }
  if (kept.settings !== undefined) kept.settings = structuredClone(kept.settings);
  return kept;
}

/** An instance larger than this died of its size: what the engine takes at most fits into a fraction of it. */
const VAST_BYTES = 2 ** 30;

/**
 * @param {() => WebAssembly.Module} compiled
 * @param {boolean} [keeps] whether studies keep their tables, to open themselves again after a trap
 * @returns {Engine}
 */
export function makeEngine(compiled, keeps = true) {
  /** @type {Glue | null} */
  let glue = null;
  /** The instance's memory. @type {WebAssembly.Memory | null} */
  let memory = null;

  function instantiate() {
    const fresh = wasmGlue();
    memory = fresh.initSync({ module: compiled() }).memory;
    return fresh;
  }

  /**
   * Runs one call into the engine. A panic's text goes to `console.error` before the trap; it is kept for the details.
   * @template T
   * @param {(glue: Glue) => T} job
   * @returns {T}
   */
  function call(job) {
    const speak = console.error;
    let panic = "";
    console.error = (...parts) => {
      panic = parts.map(String).join(" ");
    };
    try {
      glue ??= instantiate();
      return job(glue);
    } catch (error) {
      if (isDeliberate(error)) throw error;
      glue = null;
      const vast = memory !== null && memory.buffer.byteLength > VAST_BYTES;
      memory = null;
      const stack = error instanceof Error ? `${error.name}: ${error.message}\n${error.stack ?? ""}` : String(error);
      if (vast || (error instanceof Error && lacksMemory(error))) {
        throw engineError(
          "memory-lacking",
          "The browser has not enough memory left for this.",
          "Close other tabs, or split the table into several, and try again.",
          stack,
        );
      }
      throw engineError(
        "engine-trap",
        "The engine stopped on an error of its own.",
        "The next map gets a fresh engine. If this one fails again, please report it with the details below.",
        panic === "" ? stack : `${panic}\n${stack}`,
      );
    } finally {
      console.error = speak;
    }
  }

  /**
   * @param {EngineRequest} request
   * @param {() => EngineRequest} keep gives the request in a form that the caller cannot change any more
   * @param {{ glue: Glue, study: GlueStudy }} [opened] where it is open already
   * @returns {Study}
   */
  function studyOn(request, keep, opened) {
    /** What the study opens itself again from. */
    let kept = request;
    let owner = opened?.glue ?? null;
    let study = opened?.study ?? null;
    let closed = false;

    /**
     * Runs one call on the study, which opens itself again after its instance was dropped.
     * @template T
     * @param {(study: GlueStudy, glue: Glue) => T} job
     */
    function use(job) {
      if (closed) {
        throw engineError("study-closed", "This study has been closed.", "Open it again with the same request.");
      }
      return call((current) => {
        if (study === null || owner !== current) {
          study = current.open(kept);
          owner = current;
        }
        return job(study, current);
      });
    }

    const facts = use((opened) => ({
      head: opened.head(),
      electrodes: opened.electrodes(),
      notes: opened.notes(),
      understood: opened.understood(),
      count: opened.count,
    }));
    kept = keeps ? keep() : {};

    return {
      ...facts,
      fit: (index) => use((opened) => opened.fit(index)),
      fits: (first = 0, last = facts.count) => use((opened) => opened.fits(first, last)),
      assess: (index, what) => use((opened) => opened.assess(index, what)),
      with(settings) {
        const first = use((opened, glue) => ({ glue, study: opened.with(settings) }));
        const changed = { ...kept, settings: structuredClone(settings) };
        return studyOn(changed, () => changed, first);
      },
      beside(request) {
        const first = use((opened, glue) => ({ glue, study: opened.beside(request) }));
        return studyOn(request, () => keepRequest(request), first);
      },
      renamed(names) {
        const first = use((opened, glue) => ({ glue, study: opened.renamed(names) }));
        return studyOn(kept, () => kept, first);
      },
      close() {
        if (!closed && study !== null && owner === glue) study.free();
        closed = true;
        study = null;
      },
      fitWithin: (first, milliseconds) => use((opened) => opened.fitWithin(first, milliseconds)),
      lend: use,
      matches: (other, own, others, names) =>
        use((opened) => other.lend((second) => opened.matches(second, own, others, names))),
      rank: () => use((opened) => opened.rank()),
      rowsWithin: (first, last, milliseconds) =>
        use((opened) => opened.rowsWithin(first, last, milliseconds)).map(unpackedRow),
      thumbnails: (indexes, size) => use((opened) => opened.thumbnails(indexes, size)),
      preamble: () => use((opened) => opened.preamble()),
      populationKey: () => use((opened) => opened.populationKey()),
      get populationSize() {
        return use((opened) => opened.populationSize);
      },
      population: (kind, first, milliseconds, last = Infinity) =>
        use((opened) => opened.population(kind, first, Math.min(last, opened.populationSize), milliseconds)),
      keepPopulation: (kind, numbers) => use((opened) => opened.keepPopulation(kind, numbers)),
      trust: (index) => use((opened) => opened.trust(index)),
      verdicts: (first, last, milliseconds) => use((opened) => opened.verdicts(first, last, milliseconds)),
      alternatives: (index) => use((opened) => opened.alternatives(index)),
      influence: (index) => use((opened) => opened.influence(index)),
      whatIf: (index) => use((opened) => opened.whatIf(index)),
      methods: (done) => use((opened) => opened.methods(done)),
      record: (index, done) => use((opened) => opened.record(index, done)),
      landscape: (index, at) => use((opened) => opened.landscape(index, at && Float64Array.from(at))),
      probe: (index, at, picture) => use((opened) => opened.probe(index, Float64Array.from(at), picture)),
      unshared: (first, last, milliseconds) => use((opened) => opened.unshared(first, last, milliseconds)),
      suspects: (unshared) => use((opened) => opened.suspects(unshared)),
      sheet: (index) => use((opened) => opened.sheet(index)),
      response: (fits) => use((opened) => opened.response(fits)),
      fixed: (first, last) => use((opened) => opened.fixed(first, last)),
    };
  }

  return {
    get heads() {
      return call((current) => current.heads());
    },
    analyse: (request) => call((current) => current.analyse(request)),
    open: (request) => studyOn(request, () => keepRequest(request)),
    kindOf: (content) => call((current) => current.kindOf(content)),
    roleOf: (name, content) => call((current) => current.roleOf(name, content)),
    digest: (content) => call((current) => current.digest(content)),
    compare: (list, common) => call((current) => current.compare(list, common)),
    compareStudies: (list, settings) =>
      call((current) => {
        const comparison = new current.Comparison();
        for (const { name, subject, information, study } of list) {
          study.lend((opened) => comparison.add(name, subject, information, opened));
        }
        return comparison.finish(settings);
      }),
    summary: (request) => call((current) => current.summary(request)),
    groups: (request) => call((current) => current.groups(request)),
    meanRaster: (rasters, size) => call((current) => current.meanRaster(rasters, size)),
    columns: (unit) => call((current) => current.columns(unit)),
    choices: () => call((current) => current.choices()),
    program: () => call((current) => current.program()),
  };
}
