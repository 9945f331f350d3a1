/**
 * The page's side of the worker. Every message has an id; whoever waits under that id gets the answer, and an
 * answer nobody waits for is dropped. Giving up terminates the worker and starts a fresh one from the same
 * compiled module. A trap kills only the worker: the next message goes to a fresh one. The memory of an engine never
 * shrinks: a large file is recognised by a worker of its own, and a worker that held one is replaced once the file is given up
 * and nothing is waited for.
 *
 * @typedef {{ task: WorkerTask, resolve: (value: any) => void, reject: (fault: Fault) => void,
 *             progress: ((step: any) => void) | undefined }} Waiting
 */

/** @typedef {ReturnType<typeof makeClient>} WorkerClient */

/** @param {string} code @param {string} [details] @returns {Fault} */
function clientFault(code, details) {
  return { code, message: "", where: null, hint: "", details };
}

/** Bytes from which on a file is large. */
export const LARGE_BYTES = 16 * 2 ** 20;

/** Whether a content, or something in a request, is that large. @param {unknown} given @returns {boolean} */
export function isLarge(given) {
  if (typeof given === "string" || given instanceof Uint8Array) return given.length > LARGE_BYTES;
  return typeof given === "object" && given !== null && Object.values(given).some(isLarge);
}

/** What the page has named, for all workers: requests by their keys, and of one with another's tables the other's key. */
export function makeBook() {
  return {
    next: 1,
    /** @type {Map<number, NamedRequest>} */
    requests: new Map(),
    /** @type {Map<number, number>} */
    bases: new Map(),
  };
}

/** The studies that a task needs. @param {WorkerTask} task @returns {number[]} */
export function keysOf(task) {
  if ("keys" in task) return task.keys;
  return "key" in task && task.kind !== "close" ? [task.key] : [];
}

/**
 * @param {WebAssembly.Module} module
 * @param {() => Worker} startWorker
 * @param {ReturnType<typeof makeBook>} [book] shared by all workers
 */
export function makeClient(module, startWorker, book = makeBook()) {
  /** @type {Worker | null} */
  let worker = null;
  /** Whether the browser lets workers run at all. */
  let answered = false;
  /** When it said something last. */
  let heard = 0;
  let nextId = 1;
  /** @type {Map<number, Waiting>} */
  const waiting = new Map();
  const { requests, bases } = book;
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
    if (from === worker) heard = performance.now();
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
   * @returns {NamedRequest | ChangedRequest | undefined}
   */
  function requestOf(key) {
    const request = requests.get(key);
    const from = bases.get(key);
    if (request === undefined || from === undefined || !told.has(from)) return request;
    const { settings = {}, lenient } = request;
    return { from, settings, lenient };
  }

  /** @param {number} id @param {WorkerTask} task */
  function post(id, task) {
    try {
      const present = ensureWorker();
      /** @type {Record<number, NamedRequest | ChangedRequest>} */
      const named = {};
      for (const key of keysOf(task)) {
        const request = told.has(key) ? undefined : requestOf(key);
        if (request !== undefined) named[key] = request;
        told.add(key);
      }
      present.postMessage({ ...task, id, named });
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
   * @param {(step: any) => void} [progress]
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

  /** Closes a study, which is opened again when it is asked about. @param {number} key */
  function release(key) {
    if (worker === null || !told.delete(key)) return;
    // Another study may hold the same tables, with other settings.
    worn ||= isLarge(requests.get(key)) && ![...told].some((other) => isLarge(requests.get(other)));
    if (worn && waiting.size === 0) stop();
    else ask({ kind: "close", key }).catch(() => {});
  }

  return {
    ask,

    /** Whether nothing is waited for. */
    isIdle: () => waiting.size === 0,

    /** How much is waited for, without what is only put away. */
    waitsFor: () => [...waiting.values()].filter(({ task }) => task.kind !== "close").length,

    heardAt: () => heard,

    /** Whether it has ever said anything. */
    hasAnswered: () => answered,

    /** Takes the worker for lost, which says nothing any more. @param {string} details */
    abandon(details) {
      if (worker !== null) lose(details);
    },

    /**
     * Names a request; it travels once, with the first task that carries the key.
     * @param {NamedRequest} request
     * @param {number | null} [from] the key of a request with the same tables, whose study is used again
     */
    name(request, from) {
      const key = book.next++;
      requests.set(key, request);
      if (from !== undefined && from !== null && requests.has(from)) bases.set(key, from);
      return key;
    },

    release,

    /** @param {number} key */
    forget(key) {
      bases.delete(key);
      release(key);
      requests.delete(key);
    },

    /** Gives up everything asked about one study, or of one kind; the rest is asked again. @param {number | WorkerTask["kind"]} what */
    giveUp(what) {
      const given = [...waiting].filter(([, { task }]) => (typeof what === "string" ? task.kind === what : keysOf(task).includes(what)));
      if (given.length === 0) return;
      for (const [id] of given) waiting.delete(id);
      restart();
      for (const [, one] of given) one.reject(clientFault("given-up"));
    },
  };
}
