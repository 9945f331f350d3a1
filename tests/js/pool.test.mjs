// The page's side of the worker, with workers that only note what they are told.
import assert from "node:assert/strict";
import { test } from "node:test";
import { makeClient } from "../../www/engine/pool/client.js";

const LARGE = new Uint8Array(16 * 2 ** 20 + 1);
const SMALL = new Uint8Array(16 * 2 ** 20);

/** A client, and the workers it has started; `answer` gives what a worker says to a task, `undefined` for silence. */
function client(answer = (task) => ({ value: task.kind })) {
  const workers = [];
  const start = () => {
    const listeners = {};
    const worker = {
      told: [],
      ended: false,
      addEventListener: (name, listener) => (listeners[name] = listener),
      terminate: () => (worker.ended = true),
      say: (name, event) => !worker.ended && listeners[name](event),
      postMessage(message) {
        worker.told.push(message);
        if (message.module !== undefined) return;
        const said = answer(message);
        if (said !== undefined) queueMicrotask(() => worker.say("message", { data: { id: message.id, ...said } }));
      },
    };
    workers.push(worker);
    return worker;
  };
  return { client: makeClient({}, start), workers };
}

const alive = (workers) => workers.filter((worker) => !worker.ended).length;

test("a large file is recognised by a worker of its own, which ends with its answer", async () => {
  const { client: pool, workers } = client();
  await pool.ask({ kind: "program" });
  assert.equal(await pool.ask({ kind: "roleOf", name: "a", content: SMALL }), "roleOf");
  assert.equal(workers.length, 1);
  assert.equal(await pool.ask({ kind: "roleOf", name: "a", content: LARGE }), "roleOf");
  assert.deepEqual(workers.map((worker) => worker.ended), [false, true]);
  assert.equal(await pool.ask({ kind: "roleOf", name: "a", content: "a".repeat(LARGE.length) }), "roleOf");
  assert.equal(workers.length, 3);
  assert.equal(alive(workers), 1);
});

test("a fault of that worker, or its death, is told and ends it", async () => {
  const fault = { code: "input-too-large" };
  const refusing = client(() => ({ fault }));
  await assert.rejects(refusing.client.ask({ kind: "roleOf", name: "a", content: LARGE }), fault);
  assert.equal(alive(refusing.workers), 0);
  const silent = client(() => undefined);
  const asked = silent.client.ask({ kind: "roleOf", name: "a", content: LARGE });
  silent.workers[0].say("error", { preventDefault() {}, message: "gone" });
  await assert.rejects(asked, { code: "worker-lost", details: "gone" });
  assert.equal(alive(silent.workers), 0);
});

test("a worker that held a large file is replaced when the file is given up and nothing is waited for", async () => {
  for (const request of [{ maps: LARGE }, { files: [{ name: "a", content: "" }, { name: "b", content: LARGE }] }]) {
    const { client: pool, workers } = client();
    const large = pool.name(request);
    await pool.ask({ kind: "open", key: large });
    // The same tables with other settings keep it.
    const changed = pool.name({ ...request, settings: {} }, large);
    await pool.ask({ kind: "open", key: changed });
    pool.forget(large);
    const small = pool.name({ maps: SMALL });
    await pool.ask({ kind: "open", key: small });
    assert.equal(alive(workers), 1);
    assert.equal(workers.length, 1);
    const waited = pool.ask({ kind: "sheet", key: small, index: 0 });
    pool.forget(changed);
    assert.equal(workers[0].ended, false);
    assert.equal(await waited, "sheet");
    await pool.ask({ kind: "program" });
    assert.equal(workers[0].ended, true);
    // The next question about the other study starts it afresh.
    await pool.ask({ kind: "sheet", key: small, index: 1 });
    assert.deepEqual(workers.at(-1).told.find((message) => message.kind === "sheet").named, { [small]: { maps: SMALL } });
    assert.equal(alive(workers), 1);
  }
});

test("small files replace nothing", async () => {
  const { client: pool, workers } = client();
  const first = pool.name({ maps: SMALL });
  await pool.ask({ kind: "open", key: first });
  pool.forget(first);
  await pool.ask({ kind: "program" });
  assert.deepEqual(workers.map((worker) => worker.ended), [false]);
});
