// The engine as a module in Node: what scripts rely on. Run by tests/engine.rs; INWARD_DIST holds engine/inward.mjs.
import assert from "node:assert/strict";
import { readFileSync } from "node:fs";
import { test } from "node:test";
import { pathToFileURL } from "node:url";

import { unpacked } from "../../www/text/packed.js";
import "./trap.js";

const dist = process.env.INWARD_DIST;
const { openEngine, ...others } = await import(pathToFileURL(`${dist}/engine/inward.mjs`).href);
const engine = await openEngine();

const example = (name) => readFileSync(new URL(`../../example_maps/${name}`, import.meta.url));
const electrodes = example("watch_electrodes.tsv").toString();
const maps = example("watch_maps.tsv").toString();
const labels = maps.trim().split("\n").slice(1).map((line) => line.split("\t")[0]);

/** A table of maps over the example's labels. */
const table = (...columns) =>
  labels.map((label, i) => [label, ...columns.map((column) => column(i))].join("\t")).join("\n");

/** What a call throws, checked for the four properties of every error. */
function thrown(call, what = "") {
  try {
    call();
  } catch (error) {
    assert.ok(error instanceof Error);
    assert.match(error.code, /^[a-z]+(-[a-z]+)+$/);
    assert.match(error.message, /\.$/);
    assert.ok(typeof error.hint === "string" && error.hint.length > 5);
    assert.ok(error.where === null || Object.keys(error.where).join() === "input,file,line,column,byte,label,map");
    return error;
  }
  return assert.fail(`nothing was thrown ${what}`);
}

/** Every value is what JSON knows: no NaN, no undefined, no typed array, no class. */
function assertPlain(value, path) {
  if (value === null || typeof value === "string" || typeof value === "boolean") return;
  if (typeof value === "number") return assert.ok(Number.isFinite(value), `${path} is ${value}`);
  if (Array.isArray(value)) return value.forEach((item, i) => assertPlain(item, `${path}[${i}]`));
  assert.equal(Object.getPrototypeOf(value), Object.prototype, `${path} is a plain object`);
  for (const [key, item] of Object.entries(value)) assertPlain(item, `${path}.${key}`);
}

const KEYS = {
  report: "electrodes format head inputs maps notes populations program settings suspects understood version",
  program: "build name version",
  input: "name sha256",
  head: "axes centre_is_fitted centre_mm fit_max_mm fit_rms_mm name radius_is_fitted radius_mm shells unusual",
  shell: "conductivity_s_per_m outer_radius_mm tissue",
  electrode: "label position_mm used",
  map: "activation_sd adjusted_rv alternatives degrees_of_freedom dipole fit flipped influence measured name populations projected region residual residual_variance variance_explained verdict what_if",
  dipole:
    "at_boundary canonical_direction canonical_mm depth_mm direction eccentricity nearest_site polarity position_mm radial_share side strength strength_comparable strength_unit",
  fit: "evaluations stopped_because",
  failed: "error name",
  error: "code hint message where",
  note: "code message severity values where",
  understood: "choices columns_are files labels times",
  understoodFile: "columns encoding format header name part passed_over role rows used",
  choice: "file from options path sentence setting value",
  labels: "interpolated matched not_scalp reference renamed without_position without_value",
  row: "adjusted_rv at_boundary canonical_direction canonical_mm cells degrees_of_freedom depth_mm eccentricity flipped name nearest_site position_mm power radial_share region rv side strength variance",
  columns: "name rv adjusted_rv x y z site side region depth eccentricity strength radial boundary variance",
  place: "byte column file input label line map",
};

function assertKeys(value, kind) {
  assert.equal(Object.keys(value).sort().join(" "), KEYS[kind], kind);
}

function assertReport(report) {
  assertPlain(report, "report");
  assertKeys(report, "report");
  assert.equal(report.format, "inward-report");
  assert.equal(report.version, 1);
  assertKeys(report.program, "program");
  report.inputs.forEach((input) => assertKeys(input, "input"));
  assertKeys(report.head, "head");
  report.head.shells.forEach((shell) => assertKeys(shell, "shell"));
  report.electrodes.forEach((electrode) => assertKeys(electrode, "electrode"));
  for (const map of report.maps) {
    if ("error" in map) {
      assertKeys(map, "failed");
      assertKeys(map.error, "error");
      continue;
    }
    assertKeys(map, "map");
    assertKeys(map.dipole, "dipole");
    assertKeys(map.fit, "fit");
    const used = report.electrodes.filter((electrode) => electrode.used).length;
    assert.equal(map.degrees_of_freedom, used - 7);
    for (const layer of [map.measured, map.projected, map.residual]) {
      assert.equal(layer.length, used);
      assert.ok(Math.abs(layer.reduce((sum, v) => sum + v, 0)) < 1e-9 * Math.max(...layer.map(Math.abs), 1), "average reference");
    }
    map.measured.forEach((v, i) => assert.ok(Math.abs(v - map.projected[i] - map.residual[i]) < 1e-12));
  }
  for (const note of report.notes) {
    assertKeys(note, "note");
    assert.match(note.severity, /^(info|warning)$/);
    assert.match(note.message, /\.$/);
    if (note.where !== null) assertKeys(note.where, "place");
  }
  assertKeys(report.understood, "understood");
  report.understood.files.forEach((file) => assertKeys(file, "understoodFile"));
  for (const choice of report.understood.choices) {
    assertKeys(choice, "choice");
    assert.match(choice.sentence, /\.$/);
    assert.match(choice.from, /^(setting|found|declared|assumed)$/);
  }
  assertKeys(report.understood.labels, "labels");
  // As text: JSON does not know the sign of zero.
  assert.equal(JSON.stringify(JSON.parse(JSON.stringify(report))), JSON.stringify(report));
  assert.deepEqual(structuredClone(report), report);
}

test("the module exports openEngine alone", () => {
  assert.deepEqual(Object.keys(others), []);
});

test("analyse gives a report with every key", () => {
  const report = engine.analyse({ electrodes, maps });
  assertReport(report);
  assert.equal(report.maps.length, 6);
  assert.match(report.program.build, /^[0-9a-f]{12}$/);
  assert.equal(report.maps[0].dipole.nearest_site, "CP3");
  assert.ok(report.maps[0].variance_explained > 0.97);
  assert.equal(report.maps[0].dipole.strength_unit, "relative");
});

test("electrodes left out are standard positions, an empty text is an error", () => {
  const report = engine.analyse({ maps });
  assertReport(report);
  assert.equal(report.head.radius_mm, 88);
  assert.deepEqual(report.head.centre_mm, [0, 0, 0]);
  assert.ok(report.notes.some((note) => note.code === "standard-positions"));
  assert.equal(thrown(() => engine.analyse({ electrodes: "", maps })).code, "input-empty");
  assert.equal(thrown(() => engine.analyse({ electrodes, maps: "" })).code, "input-empty");
});

test("bytes and text give the same report", () => {
  const bytes = engine.analyse({ electrodes: new Uint8Array(Buffer.from(electrodes)), maps: new Uint8Array(Buffer.from(maps)) });
  assert.deepEqual(bytes, engine.analyse({ electrodes, maps }));
});

test("files are told apart by content, and choices of a report change what is understood", () => {
  const paired = engine.analyse({ electrodes, maps });
  const files = [
    { name: "b.txt", content: new Uint8Array(Buffer.from(maps)) },
    { name: "a.txt", content: electrodes },
  ];
  const report = engine.analyse({ files });
  assertReport(report);
  assert.deepEqual(report.maps, paired.maps);
  assert.deepEqual(report.understood.files.map(({ name, role }) => [name, role]), [["b.txt", "maps"], ["a.txt", "electrodes"]]);
  const study = engine.open({ files });
  const choice = study.understood.choices.find(({ setting }) => setting === "columns.x");
  assert.equal(choice.options.length, 4);
  const settings = { [choice.path[0]]: { [choice.path[1]]: 3, y: "x" } };
  const changed = study.with(settings);
  assert.notDeepEqual(changed.fit(0), study.fit(0));
  assert.deepEqual(changed.fit(0), engine.open({ files, settings }).fit(0));
  const wrong = [{ name: "x.csv", content: "a,b\n1" }, files[1]];
  const error = thrown(() => engine.analyse({ files: wrong }));
  assert.equal(error.where.file, "x.csv");
  for (const request of [{ files, maps }, { files: [{ name: 1, content: maps }] }, { files: { maps } }, { files: [{ name: "a", content: maps, kind: "" }] }]) {
    assert.equal(thrown(() => engine.analyse(request)).code, "settings-unknown");
  }
  assert.equal(thrown(() => engine.analyse({ files: [] })).code, "maps-missing");
  assert.equal(thrown(() => engine.analyse({ files: [files[0], files[0]] })).code, "settings-unknown");
});

test("open, fit and close say the same as analyse", () => {
  const whole = engine.analyse({ electrodes, maps, settings: { mapUnit: "uV", exclude: ["Cz"] } });
  const study = engine.open({ electrodes, maps, settings: { mapUnit: "uV", exclude: ["Cz"] } });
  assert.equal(study.count, 6);
  assert.deepEqual(study.head, whole.head);
  assert.deepEqual(study.electrodes, whole.electrodes);
  assert.deepEqual(study.notes, whole.notes);
  for (const index of [5, 0, 2, 1, 0]) assert.deepEqual(study.fit(index), whole.maps[index]);
  assert.deepEqual(study.assess(1, []), whole.maps[1]);
  assert.equal(thrown(() => study.fit(6)).code, "map-index");
  assert.equal(thrown(() => study.assess(0, ["everything"])).code, "settings-unknown");
  study.close();
  assert.equal(thrown(() => study.fit(0)).code, "study-closed");
  study.close();
});

test("odd indices are errors, and the engine goes on", () => {
  const study = engine.open({ electrodes, maps });
  for (const index of [-1, 1.5, NaN, Infinity, 6, 2 ** 32, 2 ** 32 + 1, 1e12, undefined, null, "1", 1n, Symbol("1")]) {
    for (const ask of [() => study.fit(index), () => study.assess(index, [])]) {
      assert.equal(thrown(ask).code, "map-index", String(index));
    }
  }
  assert.equal(study.fit(0).name, "lamp");
});

test("a map that cannot be fitted stands among the others with its error", () => {
  const report = engine.analyse({ maps: table((i) => Math.sin(i), () => 7, (i) => (i === 3 ? "n/a" : i % 5)) });
  assertReport(report);
  assert.ok("dipole" in report.maps[0]);
  assert.equal(report.maps[1].error.code, "map-constant");
  assert.equal(report.maps[2].error.code, "map-incomplete");
  assert.equal(thrown(() => engine.analyse({ maps: table(() => 7) })).code, "map-constant");
});

test("numbers alone are those of the report, in any slices", () => {
  const maps = table((i) => Math.sin(i), () => 7, (i) => (i === 3 ? "n/a" : i % 5), (i) => Math.cos(i * i), (i) => i % 7);
  const study = engine.open({ maps, settings: { flip: [3], mapUnit: "V", activationSd: [1, 1, 1, 3, 1] } });
  const close = (a, b) => assert.ok(Math.abs(a - b) <= 1e-14 * Math.abs(b), `${a}, not ${b}`);
  const all = study.fits();
  assert.ok(all instanceof Float64Array);
  assert.deepEqual([...study.fits(0, 2), ...study.fits(2, 5)], [...all]);
  assert.equal(study.fits(5).length, 0);
  for (let index = 0; index < study.count; index++) {
    const [x, y, z, mx, my, mz, rv, stopped] = all.subarray(8 * index);
    const map = study.fit(index);
    if ("error" in map) {
      assert.ok(all.subarray(8 * index, 8 * index + 8).every(Number.isNaN));
      continue;
    }
    const { canonical_mm, canonical_direction, strength } = map.dipole;
    [x, y, z].forEach((v, i) => close(v * study.head.radius_mm, canonical_mm[i]));
    close(Math.hypot(mx, my, mz), strength);
    [mx, my, mz].forEach((v, i) => close(v / strength, canonical_direction[i]));
    assert.equal(rv, map.residual_variance);
    assert.equal(["converged", "boundary", "iteration-limit"][stopped], map.fit.stopped_because);
  }
  for (const ends of [[0, 6], [-1, 2], [0.5, 1], ["0", 1]]) assert.equal(thrown(() => study.fits(...ends)).code, "map-index");
});

test("what is absent is null, never missing", () => {
  const report = engine.analyse({ maps: table((i) => Math.sin(i), () => 7) });
  assertReport(report);
  const { where } = report.maps[1].error;
  assertKeys(where, "place");
  assert.equal(where.file, null);
  assert.equal(where.map, report.maps[1].name);
  assert.equal(report.settings.head, null);
});

test("settings that are undefined are as good as absent", () => {
  const plain = engine.analyse({ electrodes, maps });
  const keys = ["head", "exclude", "interpolated", "axes", "mirror", "unusualHead", "laplacian", "mapUnit", "flip", "polarity", "activationSd", "assess"];
  const settings = { ...Object.fromEntries(keys.map((key) => [key, undefined])) };
  assert.deepEqual(engine.analyse({ electrodes, maps, settings }), plain);
  assert.deepEqual(engine.analyse({ electrodes, maps, settings: { head: { radius_mm: undefined } } }).maps, plain.maps);
  const study = engine.open({ electrodes, maps });
  assert.deepEqual(study.assess(0), plain.maps[0]);
  const error = thrown(() => engine.analyse({ electrodes, maps, settings: { exclude: "Cz" } }));
  assert.equal(error.code, "settings-unknown");
  assert.match(error.message, /exclude/);
  assert.equal(thrown(() => engine.open({ maps, settings: new Map([["bogus", 1]]) })).code, "settings-unknown");
});

test("unknown settings are refused", () => {
  const refused = [
    { colour: "red" },
    { mapUnit: "mV" },
    { exclude: "Cz" },
    { exclude: [3] },
    { assess: ["everything"] },
    { head: { radius: 80 } },
    { head: { shells: [{ tissue: "brain", ratio: 1 }] } },
    { head: { centre_mm: [0, 0] } },
    { head: { radius_mm: "wide" } },
    { head: [] },
    { head: { shells: [["brain", 1, 0.33]] } },
    { exclude: null },
    { flip: 0 },
    { flip: [0.5] },
    { flip: [-1] },
    { flip: [NaN] },
    { flip: ["left"] },
    { polarity: "inverted" },
    { activationSd: 1 },
    { activationSd: ["1"] },
    "relative",
    7,
    [],
  ];
  for (const settings of refused) {
    const { code } = thrown(() => engine.analyse({ electrodes, maps, settings }), JSON.stringify(settings));
    assert.equal(code, "settings-unknown", JSON.stringify(settings));
  }
  for (const request of [{ electrodes, maps, colour: "red" }, { electrodes, maps: 3 }, undefined, null, "maps"]) {
    assert.equal(typeof thrown(() => engine.analyse(request), JSON.stringify(request)).code, "string");
  }
  for (const head of [{ radius_mm: 500 }, { radius_mm: NaN }, { centre_mm: [0, NaN, 0] }, { shells: [] }]) {
    const { code } = thrown(() => engine.analyse({ electrodes, maps, settings: { head } }), JSON.stringify(head));
    assert.match(code, /^(head-invalid|settings-unknown)$/, JSON.stringify(head));
  }
});

test("settings left out and settings given as defaults mean the same", () => {
  const plain = engine.analyse({ electrodes, maps });
  for (const settings of [undefined, {}, { mapUnit: "relative" }, { exclude: [], assess: [] }]) {
    assert.deepEqual(engine.analyse({ electrodes, maps, settings }), plain);
  }
});

test("units scale the strength alone", () => {
  const micro = engine.analyse({ electrodes, maps, settings: { mapUnit: "uV" } }).maps[0];
  const volt = engine.analyse({ electrodes, maps, settings: { mapUnit: "V" } }).maps[0];
  assert.equal(micro.dipole.strength_unit, "nAm");
  assert.ok(Math.abs(volt.dipole.strength / micro.dipole.strength / 1e6 - 1) < 1e-12);
  assert.deepEqual(volt.dipole.position_mm, micro.dipole.position_mm);
});

test("heads to choose from are taken as they are and recognised", () => {
  const { heads } = engine;
  assertPlain(heads, "heads");
  assert.ok(heads.length >= 4 && heads.length <= 6);
  const plain = engine.analyse({ electrodes, maps });
  assert.equal(plain.head.name, heads[0].name);
  for (const { name, title, source, shells } of heads) {
    assert.ok(title.length > 5 && source.length > 5);
    const report = engine.analyse({ electrodes, maps, settings: { head: { shells } } });
    assertReport(report);
    assert.equal(report.head.name, name);
    assert.deepEqual(report.settings.head.shells, shells);
    if (name === heads[0].name) assert.deepEqual(report.maps, plain.maps);
    else assert.notDeepEqual(report.maps[0].dipole.position_mm, plain.maps[0].dipole.position_mm);
  }
  const [{ shells }] = heads;
  shells[2].conductivity *= 2;
  assert.equal(engine.analyse({ electrodes, maps, settings: { head: { shells } } }).head.name, null);
  assert.notEqual(engine.heads[0].shells[2].conductivity, shells[2].conductivity, "the catalogue is not the caller's");
});

test("a study under other settings is what a new one is, and lives by itself", () => {
  const study = engine.open({ electrodes, maps });
  const settings = { exclude: ["Cz"], flip: [1], polarity: "declared", activationSd: [null, 2] };
  const expected = engine.analyse({ electrodes, maps, settings });
  assertReport(expected);
  const other = study.with(settings);
  settings.exclude.push("Pz");
  study.close();
  for (let k = 0; k < 2; k++) {
    assert.deepEqual(other.preamble(), { ...expected, maps: [] });
    assert.deepEqual(other.electrodes, expected.electrodes);
    expected.maps.forEach((map, index) => assert.deepEqual(other.fit(index), map));
    globalThis.armTrap();
    assert.equal(thrown(() => other.fit(0)).code, "engine-trap");
  }
  assert.equal(thrown(() => study.with({})).code, "study-closed");
  assert.equal(thrown(() => other.with({ flip: [99] })).code, "map-index");
  assert.equal(thrown(() => other.with({ activationSd: [0] })).code, "activation-sd-invalid");
  assert.equal(thrown(() => other.with({ colour: "red" })).code, "settings-unknown");
  const back = other.with();
  assert.deepEqual(back.fit(0), engine.analyse({ electrodes, maps }).maps[0]);
  other.close();
  back.close();
});

test("the sheet tells electrodes, figure and head", () => {
  const study = engine.open({ electrodes, maps, settings: { exclude: ["Cz"] } });
  const { picture, ...sheet } = study.sheet(0);
  assertPlain(sheet, "sheet");
  assert.equal(Object.keys(sheet).sort().join(" "), "alt electrodes figure head rows scale sentence");
  assert.equal(Object.keys(sheet.alt).sort().join(" "), "above behind left measured projected residual turned");
  assert.deepEqual(sheet.electrodes.map((e) => [e.label, e.used]), picture.electrodes.map((e) => [e.label, e.used]));
  assert.deepEqual(sheet.electrodes.filter((e) => !e.used).map((e) => e.label), ["Cz"]);
  assert.equal(sheet.figure.electrodes.length, picture.electrodes.length);
  assert.equal(sheet.figure.axis, true);
  const codes = sheet.rows.map((row) => row.code);
  for (const code of [
    "residual_variance", "variance_explained", "adjusted_rv", "degrees_of_freedom", "electrodes", "nearest_site", "side",
    "depth_mm", "eccentricity", "canonical_mm", "position_mm", "canonical_direction", "direction", "polarity",
    "radial_share", "strength", "head", "head_radius_mm",
  ]) {
    assert.ok(codes.includes(code), code);
  }
  for (const row of [...sheet.rows, ...sheet.head.rows]) {
    assert.ok(row.label !== "" && row.value !== "" && row.meaning.endsWith("."), JSON.stringify(row));
  }
  study.close();
});

test("errors point to the place", () => {
  const lines = electrodes.trim().split("\n");
  lines[5] = lines[5].replace(/\S+$/, "far");
  const { code, where } = thrown(() => engine.analyse({ electrodes: lines.join("\n"), maps }));
  assert.equal(code, "number-expected");
  assert.deepEqual({ ...where }, { input: "electrodes", file: null, line: 6, column: 4, byte: null, label: labels[4], map: null });
  const bytes = new Uint8Array(Buffer.from(maps));
  bytes[40] = 0xff;
  const encoding = thrown(() => engine.analyse({ electrodes, maps: bytes, settings: { files: { maps: { encoding: "utf-8" } } } }));
  assert.equal(encoding.code, "input-encoding");
  assert.equal(encoding.where.byte, 41);
});

test("the caller's bytes are left alone and may change afterwards", () => {
  const bytes = new Uint8Array(Buffer.from(maps));
  const study = engine.open({ electrodes, maps: bytes });
  assert.deepEqual(Buffer.from(bytes).toString(), maps);
  bytes.fill(0);
  assert.equal(study.fit(0).name, "lamp");
  study.close();
});

test("after a trap the engine goes on with a fresh instance", () => {
  const expected = engine.analyse({ electrodes, maps });
  globalThis.armTrap();
  const error = thrown(() => engine.analyse({ electrodes, maps }));
  assert.equal(error.code, "engine-trap");
  assert.match(error.details, /RuntimeError/);
  assert.deepEqual(engine.analyse({ electrodes, maps }), expected);
});

test("an open study survives a trap by opening itself again", () => {
  const study = engine.open({ electrodes, maps });
  const other = engine.open({ maps });
  const expected = [study.fit(2), other.fit(1)];
  globalThis.armTrap();
  assert.equal(thrown(() => study.fit(2)).code, "engine-trap");
  assert.deepEqual(study.fit(2), expected[0]);
  assert.deepEqual(other.fit(1), expected[1]);
  study.close();
  other.close();
  assert.equal(thrown(() => study.fit(0)).code, "study-closed");
});

test("two engines do not disturb each other", async () => {
  const second = await openEngine();
  const study = second.open({ electrodes, maps });
  globalThis.armTrap();
  assert.equal(thrown(() => engine.analyse({ electrodes, maps })).code, "engine-trap");
  assert.equal(study.fit(0).name, "lamp");
});

test("many studies do not fill the memory", () => {
  for (let k = 0; k < 60; k++) {
    const study = engine.open({ electrodes, maps });
    study.fit(0);
    study.close();
  }
});

test("65,536 maps are read, one more is an error", { timeout: 300_000 }, () => {
  const wide = (count) => labels.slice(0, 12).map((label, i) => label + `\t${i % 7}.${i}`.repeat(count)).join("\n");
  const study = engine.open({ maps: wide(65_536) });
  assert.equal(study.count, 65_536);
  assert.equal(study.fit(65_535).degrees_of_freedom, 5);
  study.close();
  assert.equal(thrown(() => engine.open({ maps: wide(65_537) })).code, "maps-too-many");
});

test("the wasm in module and page is the same and holds no path of the machine that built it", () => {
  const packed = (text, pattern) => Buffer.from(unpacked(pattern.exec(text)[1]));
  const module = readFileSync(`${dist}/engine/inward.mjs`, "utf8");
  const page = readFileSync(`${dist}/inward.html`, "utf8");
  const inModule = packed(module, /WASM_PACKED\s*=\s*"([^"]+)"/);
  const inPage = packed(page, /<script[^>]*id="wasm"[^>]*>([^<]+)</);
  assert.ok(inModule.equals(inPage));
  for (const text of [module, page, inModule.toString("latin1")]) {
    for (const path of [process.env.HOME, ".cargo/registry", ".rustup/toolchains", new URL("../..", import.meta.url).pathname]) {
      assert.ok(!text.includes(path), `${path} stands in the bundle`);
    }
  }
});

test("rows are the fits as lines of a table, thumbnails their maps", () => {
  const study = engine.open({ electrodes, maps, settings: { flip: [1] } });
  const rows = [];
  while (rows.length < study.count) rows.push(...study.rowsWithin(rows.length, study.count, 0));
  const codes = engine.columns().map((column) => column.code);
  assert.equal(codes.join(" "), KEYS.columns);
  rows.forEach((row, index) => {
    assertPlain(row, "row");
    assertKeys(row, "row");
    const map = study.fit(index);
    assert.equal(row.rv, map.residual_variance);
    assert.deepEqual(row.canonical_mm, map.dipole.canonical_mm);
    assert.equal(row.cells.length, codes.length);
    assert.equal(row.cells[0], map.name);
  });
  assert.equal(study.rowsWithin(1, 2, 1000).length, 1);
  const thumbnails = study.thumbnails([1, 0], 16);
  assert.equal(thumbnails.size, 16);
  assert.ok(thumbnails.measured.every((raster) => raster instanceof Float32Array && raster.length === 256));
  assert.ok(thumbnails.limit.every((limit) => limit > 0) && thumbnails.outline.length > 6);
  const plain = engine.open({ electrodes, maps });
  const unturned = plain.thumbnails([1], 16).measured[0];
  assert.deepEqual(thumbnails.measured[0].filter(Number.isFinite), unturned.filter(Number.isFinite).map((value) => -value));
  for (const call of [() => study.thumbnails([0], 4), () => study.thumbnails("0", 16), () => engine.columns("mV")]) {
    assert.equal(thrown(call).code, "settings-unknown");
  }
  assert.equal(thrown(() => study.thumbnails([study.count], 16)).code, "map-index");
});

const COMPARISON_KEYS = {
  comparison: "decompositions differences format groups notes pairs program version",
  decomposition:
    "electrodes fitted head information inputs maps median_rv name near_dipolar notes populations rank settings subject understood",
  nearDipolar: "at count share weighted_share",
  pair: "a b electrodes error matches unmatched_a unmatched_b",
  match: "correlation distance_mm index_a index_b",
  group: "curve high information low median_rv members name share subjects",
  difference: "a b difference high low subjects",
};
const assertCompared = (value, kind) => assert.equal(Object.keys(value).sort().join(" "), COMPARISON_KEYS[kind], kind);

test("a comparison holds the single reports bit for bit", () => {
  const noisy = table(...[1, 2, 3].map((k) => (i) => Math.sin(k * i * i)));
  const head = { radius_mm: 90 };
  const list = [
    { name: "one", maps, information: 12.5 },
    { name: "two", maps: noisy, electrodes, head, settings: { exclude: ["Cz"], flip: [1], activationSd: [1, 2, 3] } },
    { name: "flat", maps: table(() => 1) },
    { name: "elsewhere", files: [{ name: "m", content: maps }], subject: "s1" },
  ];
  const common = { electrodes, settings: { mapUnit: "uV", at: [0.1, 0.2] } };
  const report = engine.compare(list, common);
  assertPlain(report, "comparison");
  assertCompared(report, "comparison");
  assert.deepEqual([report.format, report.version, report.program], ["inward-comparison", 1, engine.program()]);
  const requests = [
    { electrodes, maps, settings: { mapUnit: "uV" } },
    { electrodes, maps: noisy, settings: { mapUnit: "uV", head, ...list[1].settings } },
    null,
    { files: list[3].files, settings: { mapUnit: "uV" } },
  ];
  report.decompositions.forEach((decomposition, index) => {
    assertCompared(decomposition, "decomposition");
    assertCompared(decomposition.near_dipolar, "nearDipolar");
    if (requests[index] === null) return;
    const single = engine.analyse(requests[index]);
    for (const key of ["inputs", "settings", "head", "electrodes", "maps", "notes", "understood"]) {
      assert.deepEqual(decomposition[key], single[key], `${key} of ${decomposition.name}`);
    }
    const counts = [0.1, 0.2].map((at) => single.maps.filter((map) => map.residual_variance <= at).length);
    assert.deepEqual(decomposition.near_dipolar.count, counts);
    assert.deepEqual(decomposition.near_dipolar.share, counts.map((count) => count / single.maps.length));
  });
  const [one, two, flat, elsewhere] = report.decompositions;
  assert.deepEqual([one.information, two.information, elsewhere.subject], [12.5, null, "s1"]);
  assert.deepEqual([flat.maps[0].error.code, flat.median_rv, flat.fitted, flat.near_dipolar.share], ["map-constant", null, 0, [null, null]]);
  assert.equal(two.near_dipolar.weighted_share?.length, 2);
  assert.deepEqual(report.pairs.map(({ a, b }) => [a, b]), [[0, 1], [0, 2], [1, 2]]);
  report.pairs.forEach((pair) => {
    assertCompared(pair, "pair");
    pair.matches.forEach((match) => assertCompared(match, "match"));
  });
  assert.equal(report.pairs[0].matches.length, 3);
  assert.equal(report.pairs[0].electrodes, one.electrodes.length - 1);
  assert.ok(report.notes.some((note) => note.code === "electrode-sets-differ" && note.severity === "warning"));
  const { at, ...settings } = common.settings;
  const studies = list.map(({ name, subject, information, head, settings: own, ...tables }) => {
    const all = { ...settings, ...own, ...(head && { head }) };
    const study = engine.open({ ...("files" in tables ? {} : { electrodes }), ...tables, settings: all });
    return { name, subject, information, study };
  });
  assert.deepEqual(engine.compareStudies(studies, { at }), report);
  const centre = ({ dipole }) => dipole.canonical_mm;
  const [own, others] = [one, two].map(({ maps }) => new Float64Array(maps.flatMap(centre)));
  const matched = studies[0].study.matches(studies[1].study, own, others);
  assert.deepEqual(matched.matches.map(({ cells, ...match }) => match), report.pairs[0].matches);
  assert.ok(matched.matches.every(({ cells }) => cells.length === 5));
  assert.deepEqual(studies[0].study.rank(), { rank: one.rank, note: null });
});

test("groups of subjects have intervals, and wrong comparisons are refused by name", () => {
  const noisy = (k) => table((i) => Math.sin(k * i * i) + Math.cos(i / 9), (i) => Math.sin(i / k));
  const list = ["a", "b"].flatMap((name, k) =>
    [1, 2, 3, 4, 5].map((s) => ({ name, subject: `s${s}`, maps: noisy(s + 7 * k) })),
  );
  const report = engine.compare(list, { electrodes, settings: { at: [0.5], seed: 3, draws: 2000, pairs: [[0, 5]] } });
  assertPlain(report, "comparison");
  report.groups.forEach((group) => assertCompared(group, "group"));
  report.differences.forEach((difference) => assertCompared(difference, "difference"));
  assert.deepEqual([report.groups.length, report.differences.length, report.pairs.length], [2, 1, 1]);
  assert.ok(report.groups.every(({ low, share, high }) => low[0] <= share[0] && share[0] <= high[0]));
  const members = report.decompositions.map(({ name, subject, maps, electrodes: all }) => ({
    name,
    subject,
    rv: maps.map((map) => map.residual_variance),
    electrodes: all.map(({ label }) => label),
  }));
  const summary = engine.summary({ members, at: [0.5], seed: 3, draws: 2000 });
  assertPlain(summary, "summary");
  assert.deepEqual(summary.groups.map(({ cells, ...group }) => group), report.groups);
  assert.deepEqual(engine.summary({ members: [{ name: "a", rv: [0.1, NaN, null] }] }).members[0].fitted, 1);

  const refused = (change, common, said) => {
    const error = thrown(() => engine.compare([{ name: "first", maps }, change], { electrodes, ...common }), said);
    assert.match(error.message, new RegExp(said));
    return error;
  };
  for (const [change, common, said] of [
    [{ name: "x", maps, wrong: 1 }, {}, "decomposition “x”: A setting was not understood: unknown part `wrong`"],
    [{ maps }, {}, "decomposition 2 has no name"],
    [{ name: "x", maps, subject: 4 }, {}, "“x”.*subject"],
    [{ name: "x", maps, information: "much" }, {}, "“x”.*information"],
    [{ name: "x", maps, settings: { at: [0.1] } }, {}, "“x”.*settings.at"],
    [{ name: "x", maps, head: { radius: 3 } }, {}, "“x”.*settings.head"],
    [{ name: "x", maps }, { settings: { wrong: 1 } }, "“first”.*settings.wrong"],
    [{ name: "x", maps }, { maps }, "`maps`"],
    [{ name: "x", maps }, { settings: { pairs: [[0, 2]] } }, "pairs"],
    [{ name: "x", maps }, { settings: { at: "5 %" } }, "`at`"],
    [{ name: "x", maps }, { settings: { draws: 10 } }, "`draws`"],
  ]) {
    assert.equal(refused(change, common, said).code, "settings-unknown");
  }
  const empty = refused({ name: "empty", maps: "" }, {}, "In the decomposition “empty”: ");
  assert.deepEqual([empty.code, empty.decomposition], ["input-empty", "empty"]);
  assert.equal(thrown(() => engine.compare("x")).code, "settings-unknown");
  assert.deepEqual(engine.compare([]).decompositions, []);
});

test("populations can be drawn in pieces elsewhere and handed over", () => {
  const settings = { sources: { draws: 1000, seed: 3 } };
  const study = engine.open({ electrodes, maps, settings });
  const error = thrown(() => study.verdicts(0, study.count, 1000));
  assert.equal(error.code, "populations-lacking");
  assert.equal(study.trust(0).verdict, null);
  assert.equal(thrown(() => study.population("three-dipoles", 0, 10)).code, "settings-unknown");
  assert.equal(thrown(() => study.keepPopulation("noise", new Float64Array([0.5]))).code, "settings-unknown");
  const kinds = ["noise", "one-dipole", "two-dipoles", "five-dipoles", "twenty-dipoles", "hundred-dipoles"];
  const other = engine.open({ electrodes, maps, settings });
  assert.equal(other.populationKey(), study.populationKey());
  assert.notEqual(study.with({ ...settings, exclude: ["Cz"] }).populationKey(), study.populationKey());
  for (const kind of kinds) {
    const all = study.population(kind, 0, Infinity);
    assert.equal(all.length, 2 * study.populationSize);
    const pieces = [study.population(kind, 0, 0), study.population(kind, 990, Infinity)];
    assert.ok(pieces[0].length > 0 && pieces[0].length < 200);
    assert.deepEqual(pieces[0], all.slice(0, pieces[0].length));
    assert.deepEqual(pieces[1], all.slice(1980));
    assert.deepEqual(study.population(kind, 5, Infinity, 30), all.slice(10, 60));
    study.keepPopulation(kind, all);
  }
  const what = ["region", "populations", "verdict"];
  const handed = study.assess(0, what);
  // The other study draws by itself.
  assert.deepEqual(other.assess(0, what), handed);
  assertPlain(handed, "map");
  assert.deepEqual(study.preamble().populations.map(({ kind, draws }) => [kind, draws]), kinds.map((kind) => [kind, 1000]));
  assert.deepEqual(study.fit(0), { ...handed, region: null, populations: null, verdict: null });
  assert.deepEqual(study.verdicts(0, study.count, 1000)[0], handed.verdict.word);
  const trust = study.trust(0);
  assert.deepEqual([trust.verdict.word, trust.populations.length], [handed.verdict.word, 6]);
  assert.equal(trust.region.cloud.length, handed.region.draws);
  // Other electrodes have other populations; the same ones share what is kept.
  assert.equal(study.with({ ...settings, exclude: ["Cz"] }).trust(0).verdict, null);
  assert.deepEqual(study.with({ ...settings, polarity: "declared" }).trust(0).verdict, trust.verdict);
});

test("time points give a response, dipoles of several people groups", () => {
  const times = engine.open({ electrodes, maps, settings: { columnsAre: "time-points" } });
  const response = times.response();
  assertPlain(response, "response");
  assert.deepEqual([response.unit, response.times.length, response.gfp.length], ["samples", times.count, times.count]);
  assert.deepEqual(response.rv, [...Array(times.count).keys()].map((index) => times.fit(index).residual_variance));
  const fixed = times.fixed(0, 2);
  assertPlain(fixed, "fixed");
  assert.equal(fixed.rv.length, 3);
  assert.ok(fixed.rv.every((rv, index) => rv >= response.rv[index] - 1e-12));
  assert.equal(thrown(() => times.fixed(0, times.count)).code, "map-index");
  const study = engine.open({ electrodes, maps, settings: { columnsAre: "components" } });
  assert.deepEqual([study.response(), study.fixed(0, 1)], [null, null]);
  const numbers = study.fits();
  const dipoles = [...Array(study.count).keys()].map((map) => ({
    map,
    position: [...numbers.slice(8 * map, 8 * map + 3)],
    direction: [...numbers.slice(8 * map + 3, 8 * map + 6)],
    rv: numbers[8 * map + 6],
  }));
  const members = ["s1", "s2", "s3"].map((subject) => ({ name: "ICA", subject, dipoles }));
  const groups = engine.groups({ members });
  assertPlain(groups, "groups");
  assert.ok(groups.groups.every((group) => group.subjects === 3 && group.members.length % 3 === 0));
  assert.equal(engine.groups({ members, groups: 1 }).count, 1);
  assert.equal(thrown(() => engine.groups({ members, groups: 25 })).code, "setting-range");
  assert.equal(thrown(() => engine.groups({ members: [{ name: "x", dipoles: [{ map: 0 }] }] })).code, "settings-unknown");
  const { measured, rim_degrees, size } = study.thumbnails([0, 0], 16);
  const turned = measured[1].map((value) => -value);
  const mean = engine.meanRaster([[measured[0], rim_degrees], [turned, rim_degrees]], size);
  assert.deepEqual(mean, measured[0]);
  assert.equal(thrown(() => engine.meanRaster([[measured[0], rim_degrees]], 17)).code, "settings-unknown");
});

test("other explanations, influence, other heads and slices are told of a map, and nothing of one that is not fitted", () => {
  const study = engine.open({ electrodes, maps });
  const { maps: fits, electrodes: sites } = engine.analyse({ electrodes, maps, settings: { assess: ["alternatives", "influence", "what_if"] } });
  const rv = fits[0].residual_variance;
  const { kinds, verdict, notes } = study.alternatives(0);
  assert.equal(verdict, null, "no populations are drawn");
  assert.ok(notes.length > 0);
  assert.deepEqual(kinds.map(({ kind }) => kind), ["single", "second-minimum", "mirrored-pair", "two-dipoles"]);
  kinds.slice(1).forEach((kind, index) => assert.equal(kind.decision, fits[0].alternatives[index].decision));
  assert.ok(kinds.every(({ cells, sentence }) => cells.length === 7 && sentence.endsWith(".")));

  const influence = study.influence(0);
  const used = sites.filter((electrode) => electrode.used).length;
  assert.equal(influence.electrodes.length, used);
  const farthest = fits[0].influence.reduce((a, b) => (b.shift_mm > a.shift_mm ? b : a));
  assert.equal(influence.electrodes[0].label, farthest.label);

  const whatIf = study.whatIf(0);
  assert.deepEqual(whatIf.rows.map(({ change }) => change), fits[0].what_if.map(({ change }) => change));
  assert.ok(whatIf.rows.some(({ change, shift_mm }) => change === "skull-80" && shift_mm > 3));

  const landscape = study.landscape(0);
  assert.equal(landscape.slices.length, 3);
  for (const { rv: slice, contours } of landscape.slices) {
    assert.equal(slice.length, landscape.size ** 2);
    assert.ok(slice.every((value) => Number.isNaN(value) || value >= rv - 1e-6));
    assert.ok(contours.length > 0);
  }
  const there = study.probe(0, landscape.best, true);
  assert.ok(Math.abs(there.rv - rv) < 1e-9);
  assert.ok(there.picture !== null && study.probe(0, [0.1, 0.2, 0.3], false).picture === null);
  const lost = study.probe(0, [NaN, 0, 0], false);
  assert.deepEqual(lost.at, [0, 0, 0]);

  const shares = study.unshared(0, study.count, Infinity);
  assert.equal(shares.length, used * study.count);
  assert.equal(study.suspects(shares), null, "six maps are too few");
  study.close();

  const flat = engine.open({ electrodes, maps: maps.split("\n").map((line, row) => line && `${line}\t${row ? 1 : "flat"}`).join("\n") });
  const last = flat.count - 1;
  for (const told of [flat.alternatives(last), flat.influence(last), flat.whatIf(last), flat.landscape(last), flat.probe(last, [0, 0, 0], true)]) assert.equal(told, null);
  flat.close();
});

test("methods and records are told by what was done, and what is no part of that is refused", () => {
  const study = engine.open({ electrodes, maps });
  const plain = study.methods();
  assert.deepEqual(study.methods({}), plain);
  assert.deepEqual(study.methods({ region: false, threshold: null, subjects: 0 }), plain);
  const { paragraph, references } = study.methods({ region: true, shares: true, threshold: 0.125, group_count: null });
  assert.ok(paragraph.includes("ellipsoid") && paragraph.includes("12.5 %") && !plain.paragraph.includes("ellipsoid"));
  assert.ok(references.length > plain.references.length);
  const { title, parts } = study.record(0, { region: true });
  assert.ok(title.length > 0 && parts.every(({ heading, lines }) => heading.length > 0 && lines.every((line) => typeof line === "string")));
  assert.ok(parts[0].lines[0].includes("not a diagnostic finding"));
  assert.equal(thrown(() => study.methods({ regions: true })).code, "settings-unknown");
  assert.match(thrown(() => study.record(0, { regions: true })).message, /done\.regions/);
  assert.equal(thrown(() => study.record(study.count)).code, "map-index");
  study.close();
});
