/**
 * The page's side of the worker. Every message has an id; whoever waits under that id gets the answer, and an
 * answer nobody waits for is dropped. Giving up terminates the worker and starts a fresh one from the same
 * compiled module. A trap kills only the worker: the next message goes to a fresh one. The memory of an engine never
 * shrinks: a large file is recognised by a worker of its own, and a worker that held one is replaced once the file is given up
 * and nothing is waited for.
 *
 * @typedef {{ task: WorkerTask, resolve: (value: any) => void, reject: (fault: Fault) => void,
 *             progress: ((step: FitProgress) => void) | undefined }} Waiting
 */

/** @typedef {ReturnType<typeof makeClient>} EngineClient */

/** @param {string} code @param {string} [details] @returns {Fault} */
function clientFault(code, details) {
  return { code, message: "", where: null, hint: "", details };
}

/** Bytes from which on a file is large. */
const LARGE_BYTES = 16 * 2 ** 20;

/** Whether a content, or something in a request, is that large. @param {unknown} given @returns {boolean} */
function isLarge(given) {
  if (typeof given === "string" || given instanceof Uint8Array) return given.length > LARGE_BYTES;
  return typeof given === "object" && given !== null && Object.values(given).some(isLarge);
}

/**
 * @param {WebAssembly.Module} module
 * @param {() => Worker} startWorker
 */
export function makeClient(module, startWorker) {
  /** @type {Worker | null} */
  let worker = null;
  /** Whether the browser lets workers run at all. */
  let answered = false;
  let nextId = 1;
  let nextKey = 1;
  /** @type {Map<number, Waiting>} */
  const waiting = new Map();
  /** @type {Map<number, EngineRequest>} */
  const requests = new Map();
  /** Of a request with the tables of another and other settings, the other's key. @type {Map<number, number>} */
  const bases = new Map();
  /** Keys whose request the present worker holds. @type {Set<number>} */
  const told = new Set();
  /** Whether the present worker held a large file that was given up. */
  let worn = false;

  function stop() {
    worker?.terminate();
    worker = null;
    worn = false;
    told.clear();
  }

  function stopIfWorn() {
    if (worn && waiting.size === 0) stop();
  }

  /** @param {Worker} from @param {WorkerReply} reply */
  function receive(from, reply) {
    const one = waiting.get(reply.id);
    answered = true;
    if (from !== worker || one === undefined) return;
    if ("progress" in reply) return one.progress?.(reply.progress);
    waiting.delete(reply.id);
    stopIfWorn();
    if ("value" in reply) return one.resolve(reply.value);
    if (reply.fault.code === "engine-trap") restart();
    one.reject(reply.fault);
  }

  /** The worker itself failed, not a task in it: nothing it was asked will be answered. @param {string} details */
  function lose(details) {
    const lost = [...waiting.values()];
    waiting.clear();
    stop();
    for (const one of lost) one.reject(clientFault(answered ? "worker-lost" : "worker-unavailable", details));
  }

  function ensureWorker() {
    if (worker !== null) return worker;
    const started = startWorker();
    started.addEventListener("message", (event) => receive(started, event.data));
    started.addEventListener("error", (event) => {
      event.preventDefault();
      if (started === worker) lose(event.message ?? "");
    });
    started.addEventListener("messageerror", () => {
      if (started === worker) lose("a message could not be read");
    });
    started.postMessage({ module });
    worker = started;
    return started;
  }

  /**
   * Tables that the worker holds are not sent again.
   * @param {number} key
   * @returns {EngineRequest | ChangedRequest | undefined}
   */
  function requestOf(key) {
    const request = requests.get(key);
    const from = bases.get(key);
    if (request === undefined || from === undefined || !told.has(from)) return request;
    return { from, settings: request.settings ?? {} };
  }

  /** @param {number} id @param {WorkerTask} task */
  function post(id, task) {
    try {
      const present = ensureWorker();
      const request = "key" in task && !told.has(task.key) ? requestOf(task.key) : undefined;
      if ("key" in task) told.add(task.key);
      present.postMessage(request === undefined ? { ...task, id } : { ...task, id, request });
    } catch (error) {
      lose(String(error));
    }
  }

  /** A fresh worker takes over what is still waited for. */
  function restart() {
    stop();
    for (const [id, one] of waiting) post(id, one.task);
  }

  /**
   * @param {WorkerTask} task
   * @param {(step: FitProgress) => void} [progress]
   * @returns {Promise<any>}
   */
  function ask(task, progress) {
    if ("content" in task && isLarge(task.content)) return askApart(task);
    return new Promise((resolve, reject) => {
      const id = nextId++;
      waiting.set(id, { task, resolve, reject, progress });
      post(id, task);
    });
  }

  /** Asks a worker of its own, which ends with its answer. @param {WorkerTask} task @returns {Promise<any>} */
  function askApart(task) {
    return new Promise((resolve, reject) => {
      const apart = startWorker();
      /** @param {string} details */
      const failed = (details) => {
        apart.terminate();
        reject(clientFault("worker-lost", details));
      };
      apart.addEventListener("message", (event) => {
        apart.terminate();
        if ("value" in event.data) resolve(event.data.value);
        else reject(event.data.fault);
      });
      apart.addEventListener("error", (event) => {
        event.preventDefault();
        failed(event.message ?? "");
      });
      apart.addEventListener("messageerror", () => failed("a message could not be read"));
      try {
        apart.postMessage({ module });
        apart.postMessage({ ...task, id: 0 });
      } catch (error) {
        failed(String(error));
      }
    });
  }

  return {
    ask,

    /**
     * Names a request; it travels once, with the first task that carries the key.
     * @param {EngineRequest} request
     * @param {number | null} [from] the key of a request with the same tables, whose study is used again
     */
    name(request, from) {
      const key = nextKey++;
      requests.set(key, request);
      if (from !== undefined && from !== null && requests.has(from)) bases.set(key, from);
      return key;
    },

    /** @param {number} key */
    forget(key) {
      bases.delete(key);
      const request = requests.get(key);
      if (!requests.delete(key) || worker === null || !told.delete(key)) return;
      // Another study may hold the same tables, with other settings.
      worn ||= isLarge(request) && ![...requests.values()].some(isLarge);
      if (worn && waiting.size === 0) stop();
      else ask({ kind: "close", key }).catch(() => {});
    },

    /** Gives up everything asked about one study; the rest is asked again. @param {number} key */
    giveUp(key) {
      const given = [...waiting].filter(([, one]) => "key" in one.task && one.task.key === key);
      if (given.length === 0) return;
      for (const [id] of given) waiting.delete(id);
      restart();
      for (const [, one] of given) one.reject(clientFault("given-up"));
    },
  };
}
