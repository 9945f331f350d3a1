// Fits timed through the module, as a script would, in Node and in a browser: start, one map, a decomposition, thousands
// of maps, long tables.

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

/** Runs it all; every line is told when it is known. */
export async function bench(openEngine, tell) {
  const start = performance.now();
  const engine = await openEngine();
  engine.program();
  tell(`start: ${ms(seconds(start))}`);
  const works = [
    ...[[32, 2000], [71, 71], [71, 2000], [128, 2000], [256, 1000]].map((sizes) => () => fits(engine, ...sizes)),
    ...[[256, 1], [512, 512]].map((sizes) => () => reading(engine, ...sizes)),
    () => leavingOut(engine),
  ];
  for (const work of works) {
    // What waits for this thread is let through in between.
    await new Promise((resume) => setTimeout(resume));
    tell(work());
  }
}

if (typeof process !== "undefined") {
  const { pathToFileURL } = await import("node:url");
  const dist = process.env.INWARD_DIST ?? new URL("../target/dist", import.meta.url).pathname;
  const { openEngine } = await import(pathToFileURL(`${dist}/engine/inward.mjs`).href);
  await bench(openEngine, console.log);
}
