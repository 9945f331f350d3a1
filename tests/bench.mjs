// Fits timed through the module, as a script would, in Node and in a browser: start, one map, a decomposition, thousands
// of maps in one worker and in two, long tables. Ratios are to a calibration kernel of the same run, as in the core's bench.

const seconds = (since) => (performance.now() - since) / 1000;
const ms = (seconds) => `${(1000 * seconds).toFixed(0)} ms`;

/** Chance from a seed (a linear congruence is enough here), normal by the sum of twelve. */
let state = 1n;
const chance = () => {
  state = (state * 6364136223846793005n + 1442695040888963407n) & 0xffffffffffffffffn;
  return Number(state >> 11n) / 2 ** 53;
};
const normal = () => Array.from({ length: 12 }, chance).reduce((sum, v) => sum + v, -6);

/** Electrodes spread over the upper two thirds of a head of 88 mm. */
const spread = (count) =>
  Array.from({ length: count }, (_, k) => {
    const z = 1 - (1.35 * (k + 0.5)) / count;
    const [r, angle] = [Math.sqrt(1 - z * z), k * Math.PI * (3 - Math.sqrt(5))];
    return [88 * r * Math.cos(angle), 88 * r * Math.sin(angle), 88 * z];
  });

/** Potential of a dipole in an unbounded medium with noise: near enough to a real map to be timed. */
function map(positions) {
  const source = [30 * normal(), 30 * normal(), 30 * chance()];
  const moment = [normal(), normal(), normal()];
  return positions.map((p) => {
    const d = p.map((v, i) => v - source[i]);
    const size = Math.hypot(...d);
    return (1e4 * d.reduce((sum, v, i) => sum + v * moment[i], 0)) / size ** 3 + 0.1 * normal();
  });
}

const table = (columns, labels) => labels.map((label, i) => [label, ...columns.map((column) => column[i].toPrecision(7))].join("\t")).join("\n");

/** A table of electrodes and one of maps over them. */
function tables(electrodes, count) {
  const positions = spread(electrodes);
  const labels = positions.map((_, k) => `E${k + 1}`);
  return {
    labels,
    request: {
      electrodes: positions.map((p, k) => [labels[k], ...p].join("\t")).join("\n"),
      maps: table(Array.from({ length: count }, () => map(positions)), labels),
    },
  };
}

/** The shortest of several runs, in seconds. */
function shortest(work) {
  const times = Array.from({ length: 5 }, () => {
    const start = performance.now();
    work();
    return seconds(start);
  });
  return Math.min(...times);
}

/** Opening tables, and how much of it is reading: what is left when the same tables, already read, are opened for another head. */
function reading(engine, electrodes, count) {
  const { request } = tables(electrodes, count);
  const study = engine.open(request);
  const opened = shortest(() => engine.open(request).close());
  const prepared = shortest(() => study.with({ head: { radius_mm: 90 } }).close());
  study.close();
  return `${count} × ${electrodes} text (${(request.maps.length / 1e6).toFixed(1)} MB): open ${ms(opened)}, of it reading ${ms(opened - prepared)}`;
}

function fits(engine, electrodes, count) {
  const { request } = tables(electrodes, count);
  let start = performance.now();
  const study = engine.open(request);
  const opened = seconds(start);
  start = performance.now();
  for (let index = 0; index < study.count; index++) study.fit(index);
  const fitted = seconds(start);
  study.close();
  start = performance.now();
  engine.analyse(request);
  const analysed = seconds(start);
  return (
    `${electrodes} electrodes, ${count} maps: open ${ms(opened)}, ` +
    `one by one ${((1e6 * fitted) / count).toFixed(0)} µs a fit (${(count / fitted).toFixed(0)} a second), ` +
    `at once ${((1e6 * analysed) / count).toFixed(0)} µs with opening`
  );
}

/** What a click on an electrode waits for: the table read once, one electrode less, a new fit, sheet and picture. */
function leavingOut(engine) {
  const { request, labels } = tables(71, 71);
  const study = engine.open(request);
  study.sheet(0);
  const times = labels.map((label) => {
    const start = performance.now();
    const other = study.with({ exclude: [label] });
    other.sheet(0);
    other.close();
    return performance.now() - start;
  });
  study.close();
  times.sort((a, b) => a - b);
  const at = (share) => times[Math.floor(share * (times.length - 1))].toFixed(1);
  return `leave one of 71 electrodes out: new fit, sheet and picture ${at(0.5)} ms (median), ${at(0.9)} ms (9 of 10), ${at(1)} ms at most`;
}

/** What is told of a map beyond its fit; medians over the maps, for those that are set up once without the first. */
function explanations(engine) {
  const study = engine.open(tables(71, 12).request);
  const median = (work, times = study.count) => {
    work(0);
    const all = Array.from({ length: times }, (_, k) => timed(() => work(k))).sort((a, b) => a - b);
    return `${(1000 * all[all.length >> 1]).toFixed(1)} ms`;
  };
  const moved = (k) => study.probe(0, [k / 250 - 0.4, 0.3 - k / 250, 0.4], true);
  const told =
    `71 electrodes, medians: other explanations ${median(study.alternatives)}, influence ${median(study.influence)}, ` +
    `other heads ${median(study.whatIf)}, three slices ${median((k) => study.landscape(k))}, dipole moved by hand ${median(moved, 200)}`;
  study.close();
  return told;
}

/** The calibration kernel: two million divisions in sequence. */
function calibration() {
  return shortest(() => {
    let x = 1.5;
    for (let i = 0; i < 2e6; i++) x = 1 + 1 / x;
    if (!(x > 1)) throw new Error("the kernel went wrong");
  });
}

/** Time of fits, in seconds, in µs a fit, fits a second and calibrations. */
function told(time, count, unit) {
  const rate = `${((1e6 * time) / count).toFixed(1)} µs a fit, ${(count / time).toFixed(0)} a second`;
  return `${ms(time)} (${rate}; a fit is ${(time / count / unit).toFixed(5)} calibrations)`;
}

/** Numbers alone, warm; `native` is the time of the same code native, without wider registers, in calibrations a fit. */
function numbers(engine, unit, native) {
  const study = engine.open(tables(71, 2000).request);
  const time = shortest(() => study.fits());
  study.close();
  const ratio = native > 0 ? `; ${(time / 2000 / unit / native).toFixed(2)} times native` : "";
  return `71 electrodes, 2000 fits as numbers: ${told(time, 2000, unit)}${ratio}`;
}

function wholeHead(engine) {
  const study = engine.open(tables(256, 256).request);
  const time = shortest(() => {
    const other = study.with({ head: { radius_mm: 90 } });
    other.fits();
    other.close();
  });
  study.close();
  return `256 maps at 256 electrodes with head set-up, warm: ${ms(time)}`;
}

/** 13 montages of 71 electrodes, 22 decompositions of 71 maps for each. */
const MONTAGES = 13;
const MAPS = 22 * 71;

/** Texts of some montages; their chance depends on the number of the montage alone. */
function montage(number) {
  state = BigInt(1 + number);
  const positions = spread(71).map((p) => p.map((v) => v + 1.5 * normal()));
  const labels = positions.map((_, k) => `E${k + 1}`);
  return {
    electrodes: positions.map((p, k) => [labels[k], ...p].join("\t")).join("\n"),
    maps: table(Array.from({ length: MAPS }, () => map(positions)), labels),
  };
}

/**
 * Reads some montages; what it returns sets up their heads anew, fits all maps and tells how long reports of the first take
 * besides.
 */
export function wholeTable(engine, first, last) {
  const studies = [];
  let reading = 0;
  for (let number = first; number < last; number++) {
    const request = montage(number);
    const start = performance.now();
    studies.push(engine.open(request));
    reading += seconds(start);
  }
  return {
    reading,
    fit() {
      const start = performance.now();
      for (const study of studies) {
        const other = study.with({ head: { radius_mm: 90 } });
        other.fits();
        other.close();
      }
      return seconds(start);
    },
    /** Report objects of one montage, fits apart. */
    reports() {
      const fitted = timed(() => studies[0].fits());
      return timed(() => studies[0].fitWithin(0, Infinity)) - fitted;
    },
  };
}

function timed(work) {
  const start = performance.now();
  work();
  return seconds(start);
}

/** The table in one worker and in two; a worker answers `[first, last]` when it has read, and "fit" when it has fitted. */
async function table20306(worker, unit, tell) {
  const times = [];
  for (const count of [1, 2]) {
    const workers = Array.from({ length: count }, worker);
    const ends = workers.map((_, k) => Math.round((MONTAGES * k) / count)).concat(MONTAGES);
    const read = await Promise.all(workers.map((one, k) => one.ask([ends[k], ends[k + 1]])));
    let best = Infinity;
    for (let run = 0; run < 3; run++) {
      const start = performance.now();
      await Promise.all(workers.map((one) => one.ask("fit")));
      best = Math.min(best, seconds(start));
    }
    times.push(best);
    tell(`13 × 22 × 71 maps, head set-up and fits in ${count} ${count === 1 ? "worker" : "workers"}: ${told(best, MONTAGES * MAPS, unit)}`);
    if (count === 1) {
      const reports = await workers[0].ask("reports");
      tell(`reading them: ${ms(read[0])}; report objects: ${ms(reports * MONTAGES)}`);
    }
    for (const one of workers) one.end();
  }
  tell(`two workers against one: ${(times[0] / times[1]).toFixed(2)} times as quick`);
}

const KINDS = ["noise", "one-dipole", "two-dipoles", "five-dipoles", "twenty-dipoles", "hundred-dipoles"];

/** A share of the reference populations of 71 electrodes, in the slices that a page asks for. */
function population(study, first, last) {
  const start = performance.now();
  for (const kind of KINDS) {
    for (let done = first; done < last;) done += study.population(kind, done, 40, last).length / 2;
  }
  return seconds(start);
}

/** All of them in one worker and in two; then what a map of these waits for, with its region in words. */
async function trust(worker, unit, tell) {
  const times = [];
  for (const count of [1, 2]) {
    const workers = Array.from({ length: count }, worker);
    const size = await workers[0].ask({ trust: "open" });
    await Promise.all(workers.map((one) => one.ask({ trust: [0, 50] })));
    const start = performance.now();
    await Promise.all(workers.map((one, k) => one.ask({ trust: [(size * k) / count, (size * (k + 1)) / count] })));
    times.push(seconds(start));
    tell(
      `71 electrodes, ${6 * size} population maps in ${count} ${count === 1 ? "worker" : "workers"}: ` +
        `${times.at(-1).toFixed(2)} s (${(times.at(-1) / unit).toFixed(0)} calibrations)`,
    );
    if (count === 1) {
      const region = await workers[0].ask({ trust: "region" });
      tell(`region of a map, 200 refits: ${(1000 * region).toFixed(1)} ms (${(region / unit).toFixed(2)} calibrations)`);
    }
    for (const one of workers) one.end();
  }
  tell(`two workers against one: ${(times[0] / times[1]).toFixed(2)} times as quick`);
}

/** What a worker answers. */
export function answerer(engine) {
  let work = null;
  let study = null;
  return (question) => {
    if (question.trust !== undefined) {
      state = 71n;
      study ??= engine.open(tables(71, 40).request);
      if (question.trust === "open") return study.populationSize;
      if (question.trust !== "region") return population(study, ...question.trust);
      const all = () => Array.from({ length: study.count }, (_, index) => study.assess(index, ["region"]));
      return shortest(all) / study.count;
    }
    if (question === "fit") return work.fit();
    if (question === "reports") return work.reports();
    work = wholeTable(engine, ...question);
    work.fit();
    return work.reading;
  };
}

/**
 * Runs it all; every line is told when it is known.
 * @param worker makes a worker: `{ ask(question): Promise, end() }`
 * @param native calibrations a fit of the native code, 0 if unknown
 */
export async function bench(openEngine, tell, worker, native) {
  const start = performance.now();
  const engine = await openEngine();
  engine.program();
  tell(`start: ${ms(seconds(start))}`);
  const unit = calibration();
  tell(`calibration kernel: ${(1000 * unit).toFixed(2)} ms`);
  const works = [
    () => numbers(engine, unit, native),
    () => wholeHead(engine),
    ...[[32, 2000], [71, 71], [71, 2000], [128, 2000], [256, 1000]].map((sizes) => () => fits(engine, ...sizes)),
    ...[[256, 1], [512, 512]].map((sizes) => () => reading(engine, ...sizes)),
    () => leavingOut(engine),
    () => explanations(engine),
  ];
  for (const work of works) {
    // What waits for this thread is let through in between.
    await new Promise((resume) => setTimeout(resume));
    tell(work());
  }
  await table20306(worker, unit, tell);
  await trust(worker, unit, tell);
}

/** No `await` and no `import.meta` outside of it: a browser takes this file as a classic script. */
async function inNode() {
  const { pathToFileURL } = await import("node:url");
  const { Worker, isMainThread, parentPort } = await import("node:worker_threads");
  const script = pathToFileURL(process.argv[1]);
  const dist = process.env.INWARD_DIST ?? new URL("../target/dist", script).pathname;
  const { openEngine } = await import(pathToFileURL(`${dist}/engine/inward.mjs`).href);
  if (isMainThread) {
    const worker = () => {
      const thread = new Worker(script);
      const ask = (question) =>
        new Promise((resolve, reject) => {
          thread.once("message", resolve);
          thread.once("error", reject);
          thread.postMessage(question);
        });
      return { ask, end: () => thread.terminate() };
    };
    await bench(openEngine, console.log, worker, Number(process.env.INWARD_NATIVE_FIT ?? 0));
  } else {
    const answer = answerer(await openEngine());
    parentPort.on("message", (question) => parentPort.postMessage(answer(question)));
  }
}

if (typeof process !== "undefined") inNode();
