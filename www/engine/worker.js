/**
 * The worker: one engine, the studies the page has named, and long runs cut into slices so that other
 * messages are answered in between. Its first message is the compiled module.
 */

import { makeEngine } from "./engine.js";
import { faultOf } from "./fault.js";
import { harmless } from "../text/figures.js";
import { reportHead, reportMap, reportTail } from "../export/json.js";

const SLICE_MS = 40;

/** @type {WebAssembly.Module | null} */
let workerModule = null;

const workerEngine = makeEngine(() => {
  if (workerModule === null) throw new TypeError("the worker has no compiled module");
  return workerModule;
});

/** Requests by the page's keys; a study is opened when first asked about. @type {Map<number, EngineRequest>} */
const namedRequests = new Map();

/** Of a study under other settings, the key of the one whose tables it has. @type {Map<number, number>} */
const bases = new Map();

/** @type {Map<number, Study>} */
const studies = new Map();

/** @param {number} key @param {EngineRequest | ChangedRequest} request */
function nameRequest(key, request) {
  if (!("from" in request)) return namedRequests.set(key, request);
  const { from, settings } = request;
  const before = namedRequests.get(from);
  if (before === undefined) throw new TypeError(`study ${from} has no request`);
  bases.set(key, from);
  return namedRequests.set(key, { ...before, settings });
}

/** @param {number} key */
function studyOf(key) {
  const known = studies.get(key);
  if (known !== undefined) return known;
  const request = namedRequests.get(key);
  if (request === undefined) throw new TypeError(`study ${key} has no request`);
  const base = bases.get(key);
  const before = base === undefined ? undefined : studies.get(base);
  const study = before?.with(request.settings ?? {}) ?? workerEngine.open(request);
  studies.set(key, study);
  return study;
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

/** @param {ReportMap} map @returns {MapSummary} */
function summaryOf(map) {
  const name = harmless(map.name);
  if ("error" in map) return { name, error: /** @type {UnfittedMap} */ (map).error };
  const { dipole, residual_variance: rv, ...rest } = /** @type {any} */ (map);
  const power = rest.measured.reduce((/** @type {number} */ sum, /** @type {number} */ v) => sum + v * v, 0) / rest.measured.length;
  const variance = rest.activation_sd === null ? null : power * rest.activation_sd ** 2;
  return { ...rest, ...dipole, name, rv, power, variance, region: "", cells: [], measured: undefined, projected: undefined, residual: undefined };
}

/**
 * Fits every map in turn and hands each to `take`. Slices are as short as can be until one map is fitted, so
 * that an answer can be shown at once.
 * @param {number} id
 * @param {number} key
 * @param {Study} study
 * @param {(map: ReportMap) => void} take
 */
async function eachMap(id, key, study, take) {
  const total = study.count;
  let found = false;
  let done = 0;
  while (done < total) {
    if (studies.get(key) !== study) throw new DOMException("the study was closed meanwhile", "AbortError");
    const fitted = study.fitWithin(done, found ? SLICE_MS : 0);
    done += fitted.length;
    fitted.forEach(take);
    const maps = fitted.map(summaryOf);
    found ||= maps.some((map) => "rv" in map);
    self.postMessage({ id, progress: { done, total, maps } });
    await breathe();
  }
}

/** @param {Sheet} sheet the rasters are handed over, not copied */
function rastersOf(sheet) {
  const { measured, projected, residual } = sheet.picture;
  return [...new Set([measured.buffer, projected.buffer, residual.buffer])];
}

/** @param {WorkerMessage} message */
async function answerTask(message) {
  const { id } = message;
  if ("request" in message && message.request !== undefined) nameRequest(message.key, message.request);
  switch (message.kind) {
    case "program":
      return self.postMessage({ id, value: workerEngine.program() });
    case "heads":
      return self.postMessage({ id, value: workerEngine.heads });
    case "choices":
      return self.postMessage({ id, value: workerEngine.choices() });
    case "roleOf":
      return self.postMessage({ id, value: workerEngine.roleOf(message.name, message.content) });
    case "open": {
      const study = studyOf(message.key);
      return self.postMessage({ id, value: { preamble: study.preamble(), count: study.count } });
    }
    case "fitAll":
      await eachMap(id, message.key, studyOf(message.key), () => {});
      return self.postMessage({ id, value: null });
    case "sheet": {
      const sheet = studyOf(message.key).sheet(message.index);
      return self.postMessage({ id, value: sheet }, { transfer: rastersOf(sheet) });
    }
    case "report": {
      const study = studyOf(message.key);
      const preamble = study.preamble();
      const parts = [reportHead(preamble)];
      await eachMap(id, message.key, study, (map) => parts.push(reportMap(map, parts.length === 1)));
      parts.push(reportTail(preamble));
      return self.postMessage({ id, value: new Blob(parts, { type: "application/json" }) });
    }
    case "close":
      studies.get(message.key)?.close();
      studies.delete(message.key);
      namedRequests.delete(message.key);
      bases.delete(message.key);
      return self.postMessage({ id, value: null });
  }
}

self.addEventListener("message", (/** @type {MessageEvent} */ event) => {
  if (event.data.module !== undefined) {
    workerModule = event.data.module;
    return;
  }
  answerTask(event.data).catch((error) => self.postMessage({ id: event.data.id, fault: faultOf(error) }));
});
