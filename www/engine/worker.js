/**
 * A worker of the page: one engine, the studies the page has named, and long runs cut into slices so that other
 * messages are answered in between. Its first message is the compiled module, or the text that the page carries it in,
 * which it unpacks and compiles for all: the page stays at hand meanwhile.
 */

import { makeEngine } from "./engine.js";
import { faultOf, lacksMemory } from "./fault.js";
import { MOST_REGIONS, POPULATION_KINDS } from "./kinds.js";
import { compileWasm } from "./wasm.js";
import { harmless } from "../text/figures.js";
import { comparisonParts, reportHead, reportMap, reportTail } from "../export/json.js";

const SLICE_MS = 40;

/** @type {WebAssembly.Module | null} */
let workerModule = null;

const workerEngine = makeEngine(() => {
  if (workerModule === null) throw new TypeError("the worker has no compiled module");
  return workerModule;
}, false);

/**
 * Requests by the page's keys; a study is opened when first asked about, and the tables are not kept beside it: the page
 * ends a worker after a trap.
 * @type {Map<number, NamedRequest>}
 */
const namedRequests = new Map();

/** Of a study under other settings, the key of the one whose tables it has. @type {Map<number, number>} */
const studyBases = new Map();

/** @type {Map<number, Study>} */
const studies = new Map();

/** The study that was opened last: the next one may have its electrodes. It stays open until then. @type {Study | null} */
let latestStudy = null;

/** Tasks that are not answered yet: long ones give way to the others. */
let tasksAtHand = 0;

/** @param {number} key @param {NamedRequest | ChangedRequest} request */
function nameRequest(key, request) {
  if (!("from" in request)) return namedRequests.set(key, request);
  const { from, settings, lenient } = request;
  const before = namedRequests.get(from);
  if (before === undefined) throw new TypeError(`study ${from} has no request`);
  studyBases.set(key, from);
  return namedRequests.set(key, { ...before, settings, lenient });
}

/** A study without the wishes for electrodes that its tables do not have. @param {Study} study @param {EngineSettings} settings */
function withoutForeign(study, settings) {
  const notes = study.notes.filter(({ code }) => code === "exclude-unmatched");
  const foreign = notes.flatMap(({ values }) => /** @type {any} */ (values)?.labels ?? []);
  if (foreign.length === 0) return study;
  const own = study.with({ ...settings, exclude: settings.exclude?.filter((label) => !foreign.includes(label)) });
  study.close();
  return own;
}

/** Gives the memory of what is read back: until the collector comes, hundreds of tables would add up. @param {InwardContent} content */
function giveBack(content) {
  if (content instanceof Uint8Array) /** @type {any} */ (content.buffer).transfer?.(0);
}

/** @param {number} key */
function studyOf(key) {
  const known = studies.get(key);
  if (known !== undefined) return known;
  const request = namedRequests.get(key);
  if (request === undefined) throw new TypeError(`study ${key} has no request`);
  const { lenient, ...plain } = request;
  const base = studyBases.get(key);
  const before = base === undefined ? undefined : studies.get(base);
  const opened = before?.with(plain.settings ?? {}) ?? latestStudy?.beside(plain) ?? workerEngine.open(plain);
  const study = lenient ? withoutForeign(opened, plain.settings ?? {}) : opened;
  const latest = latestStudy;
  studies.set(key, study);
  namedRequests.set(key, { settings: plain.settings, lenient });
  if (![...namedRequests.values()].some(({ files }) => files === plain.files)) for (const { content } of plain.files ?? []) giveBack(content);
  latestStudy = study;
  if (latest !== null && ![...studies.values()].includes(latest)) latest.close();
  return study;
}

/** @param {number} key */
function closeStudy(key) {
  const study = studies.get(key);
  studies.delete(key);
  namedRequests.delete(key);
  studyBases.delete(key);
  if (toldStudy?.of === study) forgetTold();
  if (study !== latestStudy) study?.close();
}

/** Lets waiting messages in before the next slice. @returns {Promise<void>} */
function breathe() {
  return new Promise((resolve) => {
    const { port1, port2 } = new MessageChannel();
    port1.onmessage = () => {
      port1.close();
      resolve();
    };
    port2.postMessage(null);
  });
}

/** A line as it can be shown whatever the map's name holds. @param {MapSummary} map @returns {MapSummary} */
function shownRow(map) {
  const name = harmless(map.name);
  if (name === map.name) return map;
  return "error" in map ? { ...map, name } : { ...map, name, cells: map.cells.map(harmless) };
}

/**
 * Works through maps in slices, and lets other messages in between. The first slice is as short as can be, so that an
 * answer can be shown at once.
 * @param {number} key
 * @param {Study} study
 * @param {{ first: number, last: number }} range
 * @param {(done: number, milliseconds: number) => number} slice does some from one map on and tells how many
 */
async function inSlices(key, study, { first, last }, slice) {
  for (let done = first; done < last;) {
    if (studies.get(key) !== study) throw new DOMException("the study was closed meanwhile", "AbortError");
    done += slice(done, done === 0 ? 0 : SLICE_MS);
    await breathe();
  }
}

/** How long a worker that has nothing to do is kept warm. */
const WARMING_MS = 150;

/** Reads, fits and shows an example over and over for a moment, unless there is something to do. @param {EngineRequest} request */
async function warmUpOn(request) {
  const end = performance.now() + WARMING_MS;
  for (let turn = 0; performance.now() < end && tasksAtHand === 1; turn++) {
    const study = workerEngine.open(request);
    study.rowsWithin(0, study.count, SLICE_MS / 4);
    study.sheet(turn % study.count);
    study.close();
    await breathe();
  }
}

/** Which draws a study was handed last. @type {WeakMap<Study, string>} */
const handed = new WeakMap();

/** @param {Study} study @param {GivenPopulations | null} given */
function handOver(study, given) {
  if (given === null || handed.get(study) === given.name) return;
  for (const kind of POPULATION_KINDS) study.keepPopulation(kind, given.kinds[kind]);
  handed.set(study, given.name);
}

/** A study with its files under the names that may leave. @param {Study} study @param {Record<string, string> | undefined} names */
function namedStudy(study, names = {}) {
  return Object.keys(names).length === 0 ? study : study.renamed(names);
}

/** The study that was told of last: a report asks about one map after the other. @type {{ of: Study, by: string, named: Study } | null} */
let toldStudy = null;

/**
 * What is told of a study under the names that may leave.
 * @template T
 * @param {Study} study
 * @param {Record<string, string> | undefined} names
 * @param {(study: Study) => T} tell
 */
function outward(study, names = {}, tell) {
  const by = JSON.stringify(names);
  if (toldStudy?.of !== study || toldStudy.by !== by) {
    forgetTold();
    toldStudy = { of: study, by, named: namedStudy(study, names) };
  }
  return tell(toldStudy.named);
}

function forgetTold() {
  if (toldStudy !== null && toldStudy.named !== toldStudy.of) toldStudy.named.close();
  toldStudy = null;
}

/** The same whatever labels hold. @param {Methods} methods @returns {Methods} */
function harmlessMethods({ paragraph, references }) {
  return { paragraph: harmless(paragraph), references };
}

/** The same whatever names and labels hold. @param {TechnicalRecord} record @returns {TechnicalRecord} */
function harmlessRecord({ title, parts }) {
  return { title: harmless(title), parts: parts.map(({ heading, lines }) => ({ heading, lines: lines.map(harmless) })) };
}

/** Reports of maps with what is named, from one on for about so long. @param {Study} study @param {number} first @param {string[]} what @param {number} milliseconds @returns {ReportMap[]} */
function assessWithin(study, first, what, milliseconds) {
  if (what.length === 0) return study.fitWithin(first, milliseconds);
  const end = performance.now() + milliseconds;
  /** @type {ReportMap[]} */
  const maps = [];
  do maps.push(/** @type {ReportMap} */ (study.assess(first + maps.length, what)));
  while (first + maps.length < study.count && performance.now() < end);
  return maps;
}

/** Electrodes that many maps blame; null for few maps. @param {number} key @param {Study} study */
async function suspectsOf(key, study) {
  const used = study.electrodes.filter((one) => one.used).length;
  const all = new Float32Array(used * study.count);
  await inSlices(key, study, { first: 0, last: study.count }, (done, milliseconds) => {
    const some = study.unshared(done, study.count, milliseconds);
    all.set(some, used * done);
    return some.length / used;
  });
  return study.suspects(all);
}

/** @param {Study} study @returns {OpenedStudy} */
function openedStudy(study) {
  const preamble = study.preamble();
  const { note } = study.rank();
  const notes = note === null ? preamble.notes : [...preamble.notes, note];
  return { preamble: { ...preamble, notes }, count: study.count };
}

/** @param {Sheet} sheet the rasters are handed over, not copied */
function rastersOf(sheet) {
  const { measured, projected, residual } = sheet.picture;
  return [...new Set([measured.buffer, projected.buffer, residual.buffer])];
}

/**
 * The whole report, map by map.
 * @param {WorkerTask & { kind: "report" }} task
 * @param {(done: number, total: number) => void} tell
 */
async function reportBlob({ key, names, chosen, explained, populations }, tell) {
  const study = studyOf(key);
  handOver(study, populations);
  const total = study.count;
  const few = total <= MOST_REGIONS;
  const suspects = (few ? await suspectsOf(key, study) : null)?.found ?? [];
  const named = namedStudy(study, names);
  try {
    const preamble = { ...named.preamble(), suspects };
    const parts = [reportHead(preamble)];
    const what = few ? ["region"] : [];
    if (populations !== null) what.push("populations", "verdict");
    await inSlices(key, study, { first: 0, last: total }, (first, milliseconds) => {
      const maps = assessWithin(named, first, what, milliseconds);
      // What takes longer is told of single maps.
      maps.forEach((_, at) => {
        const more = [
          ...(explained.includes(first + at) ? ["alternatives"] : []),
          ...(chosen === first + at ? ["influence", "what_if"] : []),
        ];
        if (more.length > 0) maps[at] = /** @type {ReportMap} */ (named.assess(first + at, [...what, ...more]));
      });
      for (const map of maps) parts.push(reportMap(map, parts.length === 1));
      tell(first + maps.length, total);
      return maps.length;
    });
    parts.push(reportTail(preamble));
    return new Blob(parts, { type: "application/json" });
  } finally {
    if (named !== study) named.close();
  }
}

/** @param {WorkerMessage} message */
async function answerTask(message) {
  const { id } = message;
  for (const [key, request] of Object.entries(message.named ?? {})) nameRequest(Number(key), request);
  switch (message.kind) {
    case "program":
      return self.postMessage({ id, value: workerEngine.program() });
    case "heads":
      return self.postMessage({ id, value: workerEngine.heads });
    case "choices":
      return self.postMessage({ id, value: workerEngine.choices() });
    case "columns":
      return self.postMessage({ id, value: workerEngine.columns(message.unit) });
    case "roleOf":
      self.postMessage({ id, value: workerEngine.roleOf(message.name, message.content) });
      return giveBack(message.content);
    case "digest":
      return self.postMessage({ id, value: workerEngine.digest(message.content) });
    case "preamble":
      return self.postMessage({ id, value: outward(studyOf(message.key), message.names, (study) => openedStudy(study).preamble) });
    case "warm":
      await warmUpOn(message.request);
      return self.postMessage({ id, value: null });
    case "open":
      return self.postMessage({ id, value: openedStudy(studyOf(message.key)) });
    case "fit": {
      const study = studyOf(message.key);
      if (message.opening) self.postMessage({ id, progress: { study: openedStudy(study) } });
      const { first, last } = message;
      const end = Math.min(last ?? study.count, study.count);
      await inSlices(message.key, study, { first, last: end }, (done, milliseconds) => {
        const maps = study.rowsWithin(done, end, milliseconds).map(shownRow);
        self.postMessage({ id, progress: { first: done, maps } });
        return maps.length;
      });
      return self.postMessage({ id, value: null });
    }
    case "sheet": {
      const sheet = studyOf(message.key).sheet(message.index);
      return self.postMessage({ id, value: sheet }, { transfer: rastersOf(sheet) });
    }
    case "thumbnails": {
      const small = studyOf(message.key).thumbnails(message.indexes, message.size);
      const transfer = new Set(small?.measured.map(({ buffer }) => buffer));
      return self.postMessage({ id, value: small }, { transfer: [...transfer] });
    }
    case "summary":
      return self.postMessage({ id, value: workerEngine.summary(message.request) });
    case "matches": {
      const [first, second] = message.keys.map(studyOf);
      return self.postMessage({ id, value: first.matches(second, message.own, message.others, message.names) });
    }
    case "report":
      return self.postMessage({ id, value: await reportBlob(message, (done, total) => self.postMessage({ id, progress: { done, total } })) });
    case "comparison": {
      const { keys, members, names, settings } = message;
      /** @type {ComparedStudy[]} */
      const list = [];
      /** @type {Study[]} */
      const renamed = [];
      try {
        for (const [at, key] of keys.entries()) {
          const held = studyOf(key);
          const study = namedStudy(held, names?.[at]);
          if (study !== held) renamed.push(study);
          list.push({ ...members[at], study });
          self.postMessage({ id, progress: { done: at + 1, total: keys.length } });
          await breathe();
        }
        const report = workerEngine.compareStudies(list, settings);
        return self.postMessage({ id, value: new Blob(comparisonParts(report), { type: "application/json" }) });
      } finally {
        for (const study of renamed) study.close();
      }
    }
    case "population-key": {
      const study = studyOf(message.key);
      return self.postMessage({ id, value: { key: study.populationKey(), size: study.populationSize } });
    }
    case "population": {
      const { key, population, first, last } = message;
      const study = studyOf(key);
      const numbers = new Float64Array(2 * (last - first));
      await inSlices(key, study, { first, last }, (done, milliseconds) => {
        const some = study.population(population, done, milliseconds / 2, last);
        numbers.set(some, 2 * (done - first));
        return some.length / 2;
      });
      return self.postMessage({ id, value: numbers }, { transfer: [numbers.buffer] });
    }
    case "trust": {
      const study = studyOf(message.key);
      handOver(study, message.populations);
      return self.postMessage({ id, value: study.trust(message.index) });
    }
    case "verdicts": {
      const study = studyOf(message.key);
      handOver(study, message.populations);
      /** @type {(VerdictWord | null)[]} */
      const words = [];
      await inSlices(message.key, study, { first: 0, last: study.count }, (done, milliseconds) => {
        const some = study.verdicts(done, study.count, milliseconds);
        words.push(...some);
        return some.length;
      });
      return self.postMessage({ id, value: words });
    }
    case "alternatives": {
      const study = studyOf(message.key);
      handOver(study, message.populations);
      return self.postMessage({ id, value: study.alternatives(message.index) });
    }
    case "influence":
      return self.postMessage({ id, value: studyOf(message.key).influence(message.index) });
    case "what-if":
      return self.postMessage({ id, value: studyOf(message.key).whatIf(message.index) });
    case "methods":
      return self.postMessage({ id, value: harmlessMethods(outward(studyOf(message.key), message.names, (study) => study.methods(message.done))) });
    case "record": {
      const { index, populations } = message;
      const study = studyOf(message.key);
      handOver(study, populations);
      // Drawing them here would take seconds.
      const done = { ...message.done, verdict: message.done.verdict && populations !== null };
      return self.postMessage({ id, value: harmlessRecord(outward(study, message.names, (named) => named.record(index, done))) });
    }
    case "landscape":
      return self.postMessage({ id, value: studyOf(message.key).landscape(message.index, message.at ?? undefined) });
    case "probe":
      return self.postMessage({ id, value: studyOf(message.key).probe(message.index, message.at, message.picture) });
    case "suspects":
      return self.postMessage({ id, value: await suspectsOf(message.key, studyOf(message.key)) });
    case "response":
      return self.postMessage({ id, value: studyOf(message.key).response(message.fits) });
    case "fixed":
      return self.postMessage({ id, value: studyOf(message.key).fixed(message.first, message.last) });
    case "groups":
      return self.postMessage({ id, value: workerEngine.groups(message.request) });
    case "mean-raster":
      return self.postMessage({ id, value: workerEngine.meanRaster(message.rasters, message.size) });
    case "close":
      closeStudy(message.key);
      return self.postMessage({ id, value: null });
  }
}

/** @param {string} carried */
async function compileForAll(carried) {
  try {
    self.postMessage({ module: await compileWasm(carried) });
  } catch (error) {
    const code = error instanceof Error && lacksMemory(error) ? "memory-lacking" : "wasm-unavailable";
    self.postMessage({ fault: { ...faultOf(error), code, details: String(error) } });
  }
}

self.addEventListener("message", (/** @type {MessageEvent} */ event) => {
  if (event.data.carried !== undefined) {
    compileForAll(event.data.carried);
    return;
  }
  if (event.data.module !== undefined) {
    workerModule = event.data.module;
    return;
  }
  tasksAtHand++;
  answerTask(event.data)
    .catch((error) => self.postMessage({ id: event.data.id, fault: faultOf(error) }))
    .finally(() => tasksAtHand--);
});
