// The page's side of the worker, with workers that only note what they are told.
import assert from "node:assert/strict";
import { test } from "node:test";
import { makeClient } from "../../www/engine/pool/client.js";
import { makeSilence, SILENCE_MS } from "../../www/engine/pool/faults.js";
import { makePool } from "../../www/engine/pool/pool.js";

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

/** Workers that fit: sixteen maps a turn, each told as the worker's number and the map's. `spoil` may end a turn otherwise. */
function fitters(count, spoil = () => undefined) {
  const workers = [];
  const start = () => {
    const listeners = {};
    const worker = {
      number: workers.length,
      closed: [],
      ended: false,
      addEventListener: (name, listener) => (listeners[name] = listener),
      terminate: () => (worker.ended = true),
      say: (data) => !worker.ended && listeners.message({ data }),
      die: () => listeners.error({ preventDefault() {}, message: "gone" }),
      async postMessage({ id, kind, first, last, opening, key }) {
        if (kind === "close") worker.closed.push(key);
        if (kind === "close") return worker.say({ id, value: null });
        if (kind !== "fit") return;
        if (opening) worker.say({ id, progress: { study: { count, preamble: {} } } });
        for (let at = first; at < Math.min(last ?? count, count); at += 16) {
          await new Promise((resume) => setTimeout(resume, 1));
          const told = spoil(worker, at);
          if (told === "death") return worker.die();
          if (told !== undefined) return worker.say({ id, fault: { code: told } });
          const maps = Array.from({ length: Math.min(16, Math.min(last ?? count, count) - at) }, (_, k) => [worker.number, at + k]);
          worker.say({ id, progress: { first: at, maps } });
        }
        worker.say({ id, value: null });
      },
    };
    workers.push(worker);
    return worker;
  };
  const pool = makePool({}, start, 2);
  const got = [];
  const opened = [];
  const fit = (rank, ranges = [{ first: 0, last: null }], known = null) => {
    const key = pool.name({ files: [{ name: "a", content: "a" }] });
    return pool.fit(
      { key, count: known, rank: () => rank, opened: (study) => opened.push(study), fitted: (first, maps) => got.push(...maps) },
      ranges,
    );
  };
  /** Whether each map up to the end was told once. */
  const complete = (from = 0) => {
    const numbers = got.map(([, map]) => map).sort((a, b) => a - b);
    assert.deepEqual(numbers, Array.from({ length: count - from }, (_, k) => from + k));
  };
  return { pool, workers, fit, got, opened, complete };
}

test("maps of a long table are shared among workers, each told once", async () => {
  const { fit, got, opened, complete, workers } = fitters(3000);
  await fit(0);
  complete();
  assert.equal(opened.length, 1);
  assert.equal(new Set(got.map(([worker]) => worker)).size, 3);
  // The current one's tables stay open; those of others are closed when they are done.
  assert.deepEqual(workers.flatMap(({ closed }) => closed), []);
  await fit(1);
  assert.ok(workers.flatMap(({ closed }) => closed).length >= 2);
});

test("a short table is fitted by one worker; what is missing alone is fitted", async () => {
  const short = fitters(150);
  await short.fit(1);
  short.complete();
  assert.equal(new Set(short.got.map(([worker]) => worker)).size, 1);
  const rest = fitters(3000);
  await rest.fit(0, [{ first: 700, last: 3000 }], 3000);
  rest.complete(700);
  assert.equal(rest.opened.length, 0);
});

test("what a lost or trapped worker has not told is fitted by another, and nothing else again", async () => {
  for (const end of ["death", "engine-trap"]) {
    let spoilt = 0;
    const { fit, complete, workers } = fitters(3000, ({ number }, at) => (number === 1 && at > 1000 && spoilt++ < 1 ? end : undefined));
    await fit(0);
    complete();
    assert.equal(spoilt > 0 && workers.length > 3, true, end);
  }
});

test("a piece that a fresh worker begins again is told once", async () => {
  const { pool, fit, complete } = fitters(3000);
  const other = pool.name({ files: [{ name: "b", content: "b" }] });
  const asked = fit(0);
  await new Promise((resume) => setTimeout(resume, 15));
  const unanswered = pool.ask({ kind: "silent", key: other });
  await new Promise((resume) => setTimeout(resume, 5));
  pool.giveUp(other);
  await assert.rejects(unanswered, { code: "given-up" });
  await asked;
  complete();
});

test("maps that end every worker are given up after three tries, and the fault is told", async () => {
  let tries = 0;
  const { fit } = fitters(3000, (_, at) => (at === 1600 ? (tries++, "engine-trap") : undefined));
  await assert.rejects(fit(0), { code: "engine-trap" });
  assert.equal(tries, 3);
});

test("cancelling ends the work, and the next goes on", async () => {
  const { pool, fit, got, complete } = fitters(3000);
  const asked = fit(0);
  await new Promise((resume) => setTimeout(resume, 30));
  const before = got.length;
  pool.cancel();
  await assert.rejects(asked, { code: "given-up" });
  await new Promise((resume) => setTimeout(resume, 30));
  assert.ok(before > 0 && before < 3000 && got.length === before, `${before}, ${got.length}`);
  got.length = 0;
  await fit(0);
  complete();
});

const KINDS = ["noise", "one-dipole", "two-dipoles", "five-dipoles", "twenty-dipoles", "hundred-dipoles"];

/** Draw k of a kind is the number k beside the kind's; `spoil` may end a piece otherwise, and fits take turns of a millisecond; `most` workers can be started. */
function drawers(size, helpers, spoil = () => undefined, most = Infinity) {
  const asked = [];
  let started = 0;
  const start = () => {
    if (started++ >= most) throw new Error("no more workers");
    const listeners = {};
    const worker = {
      ended: false,
      addEventListener: (name, listener) => (listeners[name] = listener),
      terminate: () => (worker.ended = true),
      say: (data) => !worker.ended && listeners.message({ data }),
      async postMessage({ id, kind, key, population, first, last }) {
        if (kind === "fit") {
          for (let at = first; at < last; at += 16) {
            asked.push("fit");
            await new Promise((resume) => setTimeout(resume, 1));
            worker.say({ id, progress: { first: at, maps: Array(Math.min(16, last - at)).fill(0) } });
          }
          return worker.say({ id, value: null });
        }
        if (kind === "slow") return setTimeout(() => worker.say({ id, value: null }), 50);
        if (kind !== "population") return;
        asked.push({ key, population, first, last });
        await new Promise((resume) => setTimeout(resume, (last - first) / 10));
        const told = spoil({ worker, population, first });
        if (told === "death") return listeners.error({ preventDefault() {}, message: "gone" });
        if (told !== undefined) return worker.say({ id, fault: { code: told } });
        const numbers = Float64Array.from({ length: 2 * (last - first) }, (_, at) => (at % 2 ? KINDS.indexOf(population) : first + at / 2));
        worker.say({ id, value: numbers });
      },
    };
    return worker;
  };
  const pool = makePool({}, start, helpers);
  const got = Object.fromEntries(KINDS.map((kind) => [kind, new Map()]));
  const from = (count = 0) => Object.fromEntries(KINDS.map((kind) => [kind, count]));
  const key = pool.name({ files: [{ name: "a", content: "a" }] });
  const wanted = { key, size, drawn: (kind, first, numbers) => numbers.forEach((number, at) => got[kind].set(2 * first + at, number)) };
  const complete = (first = 0) => {
    for (const [at, kind] of KINDS.entries()) {
      const numbers = [...got[kind]].sort(([a], [b]) => a - b);
      assert.deepEqual(numbers.map(([place]) => place), Array.from({ length: 2 * (size - first) }, (_, k) => 2 * first + k));
      for (const [place, number] of numbers) assert.equal(number, place % 2 ? at : place / 2);
    }
  };
  return { pool, asked, got, wanted, from, complete };
}

test("populations are drawn in pieces, by one worker or several, each draw once, and go on where they were", async () => {
  for (const helpers of [1, 3]) {
    const { pool, asked, wanted, from, complete } = drawers(1000, helpers);
    await pool.draw(wanted, from());
    complete();
    const draws = asked.reduce((sum, { first, last }) => sum + last - first, 0);
    assert.equal(draws, 6000, "no draw is asked for twice");
  }
  const { pool, wanted, from, complete } = drawers(1000, 1);
  await pool.draw(wanted, from(300));
  complete(300);
});

test("a lost worker's draws are drawn by another, and a fault of the draws themselves is told", async () => {
  let deaths = 0;
  const dying = drawers(1000, 2, ({ first }) => (first > 0 && deaths < 2 ? (deaths++, "death") : undefined));
  await dying.pool.draw(dying.wanted, dying.from());
  assert.equal(deaths, 2);
  dying.complete();
  let tries = 0;
  const trapped = drawers(1000, 2, ({ population, first }) => (population === "two-dipoles" && first === 0 ? (tries++, "engine-trap") : undefined));
  await assert.rejects(trapped.pool.draw(trapped.wanted, trapped.from()), { code: "engine-trap" });
  assert.equal(tries, 3);
  const faulty = drawers(1000, 2, () => "settings-misunderstood");
  await assert.rejects(faulty.pool.draw(faulty.wanted, faulty.from()), { code: "settings-misunderstood" });
});

test("stopped draws tell nothing any more, another study's take their place, and fits come first", async () => {
  const { pool, asked, got, wanted, from, complete } = drawers(3000, 2);
  const stopped = pool.draw(wanted, from());
  await new Promise((resume) => setTimeout(resume, 60));
  pool.stopDrawing();
  await assert.rejects(stopped, { code: "given-up" });
  const before = got.noise.size;
  await new Promise((resume) => setTimeout(resume, 150));
  assert.ok(before > 0 && got.noise.size === before, "a late piece is dropped");
  for (const kind of KINDS) got[kind].clear();
  asked.length = 0;
  const fitted = pool.fit({ key: wanted.key, count: 2000, rank: () => 0, opened() {}, fitted() {} }, [{ first: 0, last: 2000 }]);
  const other = pool.name({ files: [{ name: "b", content: "b" }] });
  const first = pool.draw({ ...wanted, drawn: () => assert.fail("the former study's draws are of no use") }, from());
  const second = pool.draw({ ...wanted, key: other }, from());
  await assert.rejects(first, { code: "given-up" });
  await fitted;
  const begun = asked.findIndex((one) => one !== "fit");
  assert.ok(asked.slice(0, begun).length * 16 > 1000 && begun > 0, `${begun} turns of fits before the first draws`);
  await second;
  complete();
  assert.ok(asked.every((one) => one === "fit" || one.key === other));
  // Forgetting a study ends its draws.
  const third = pool.draw(wanted, from());
  pool.forget(wanted.key);
  await assert.rejects(third, { code: "given-up" });
});

test("a helper that cannot be started leaves draws and questions to the others", async () => {
  const { asked, wanted, from, complete, pool } = drawers(1000, 2, () => undefined, 1);
  await pool.draw(wanted, from());
  complete();
  assert.equal(asked.reduce((sum, { first, last }) => sum + last - first, 0), 6000);
  let started = 0;
  const lone = makePool({}, () => {
    if (started++ > 0) throw new Error("no more workers");
    const { workers, client: one } = client();
    one.ask({ kind: "program" });
    return workers[0];
  }, 2);
  await lone.ask({ kind: "program" });
  assert.equal(await lone.askAside({ kind: "verdicts", key: 1 }), "verdicts");
});

test("a worker that has a question to answer is given no draws until it has", async () => {
  const { pool, asked, wanted, from, complete } = drawers(1000, 1, () => undefined, 1);
  const question = pool.ask({ kind: "slow", key: wanted.key });
  const drawn = pool.draw(wanted, from());
  await new Promise((resume) => setTimeout(resume, 20));
  assert.equal(asked.length, 0);
  await question;
  await drawn;
  complete();
});

test("a worker is taken for lost when it is silent, not while it has something else to do or has just had", (context) => {
  context.mock.timers.enable({ apis: ["setTimeout"] });
  let now = 0;
  context.mock.method(performance, "now", () => now);
  const pass = (milliseconds) => {
    now += milliseconds;
    context.mock.timers.tick(milliseconds);
  };
  const worker = { waiting: 1, heard: 0, lost: 0, waitsFor: () => worker.waiting, heardAt: () => worker.heard, abandon: () => worker.lost++ };
  const silence = makeSilence(worker);
  pass(2 * SILENCE_MS);
  assert.equal(worker.lost, 0, "not at work yet");
  silence.listen();
  worker.waiting = 2;
  pass(SILENCE_MS);
  pass(SILENCE_MS - 1000);
  [worker.waiting, worker.heard] = [1, now];
  pass(1000);
  assert.equal(worker.lost, 0);
  pass(SILENCE_MS - 1001);
  assert.equal(worker.lost, 0);
  pass(1);
  assert.equal(worker.lost, 1);
  silence.listen();
  silence.end();
  pass(2 * SILENCE_MS);
  assert.equal(worker.lost, 1);
});
