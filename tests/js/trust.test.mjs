// What is drawn of a region and of reference populations, and how maps are listed by verdict. Run by tests/trust.rs.
import assert from "node:assert/strict";
import { readFileSync } from "node:fs";
import { test } from "node:test";
import { pathToFileURL } from "node:url";
import { densityCounts } from "../../www/draw/density.js";
import { seenFrom } from "../../www/draw/head.js";
import { outlineOf } from "../../www/draw/region.js";
import { ledgerOf } from "../../www/views/ledger.js";
import { changedNoise, enteredSetting, TRUST_FIELDS, withinLimits } from "../../www/views/trust_settings.js";
import { reportLacksText } from "../../www/text/trust.js";

/** A matrix with inverse and determinant by hand: A = M Mᵀ, so that points of the ellipsoid are c + scale · M u, |u| = 1. */
const M = [[0.09, 0, 0], [0.03, 0.05, 0], [-0.02, 0.01, 0.11]];
const C = M.map((row) => M.map((other) => row.reduce((sum, value, k) => sum + value * other[k], 0)));
const ellipsoid = {
  centre: [0.2, -0.4, 0.3],
  covariance: [C[0][0], C[0][1], C[0][2], C[1][1], C[1][2], C[2][2]],
  scale: 2.7955,
};

test("the outline of an ellipsoid is where its farthest points are seen, from any side", () => {
  for (const from of [{ turn: 0, tilt: 90 }, { turn: 0, tilt: 0 }, { turn: 90, tilt: 0 }, { turn: 215, tilt: -35 }]) {
    const see = seenFrom(from);
    const outline = outlineOf(ellipsoid, (point) => ({ x: 100 * see(point).x + 7, y: 3 - 100 * see(point).y }));
    // Points of the surface, by a grid of angles.
    const surface = [];
    for (let polar = 0; polar <= 180; polar += 2) {
      for (let azimuth = 0; azimuth < 360; azimuth += 2) {
        const [p, a] = [polar, azimuth].map((degrees) => (degrees * Math.PI) / 180);
        const u = [Math.sin(p) * Math.cos(a), Math.sin(p) * Math.sin(a), Math.cos(p)];
        const point = M.map((row, k) => ellipsoid.centre[k] + ellipsoid.scale * row.reduce((sum, value, i) => sum + value * u[i], 0));
        surface.push({ x: 100 * see(point).x + 7, y: 3 - 100 * see(point).y });
      }
    }
    for (let degrees = 0; degrees < 360; degrees += 15) {
      const [cos, sin] = [Math.cos((degrees * Math.PI) / 180), Math.sin((degrees * Math.PI) / 180)];
      const reach = (points) => Math.max(...points.map(({ x, y }) => x * cos + y * sin));
      assert.ok(Math.abs(reach(outline) - reach(surface)) < 0.1, `${JSON.stringify(from)}, ${degrees}°`);
    }
  }
});

test("every draw is counted in one cell, those at the boundary at their eccentricity", () => {
  const draws = [0.0001, 0.5, 0.001, 0, 0.0999, -0.98, 1, 0.9999, 0.5, 0.2];
  const counts = densityCounts(new Float64Array(draws));
  assert.equal(counts.reduce((sum, count) => sum + count, 0), draws.length / 2);
  const side = Math.sqrt(counts.length);
  const at = (rv, eccentricity) => side * Math.min(side - 1, Math.max(0, Math.floor(side * (1 + Math.log10(rv) / 3)))) + Math.floor(side * eccentricity);
  assert.equal(counts[at(0.0999, 0.98)], 1);
  assert.equal(counts[at(0.0001, 0.5)], 1);
  assert.equal(counts[at(1, 0.9999)], 1);
});

test("maps are grouped, sorted and filtered by their verdicts; without one they come last", () => {
  const map = (rv) => ({ name: "", rv, region: "centre", depth_mm: 0, strength: 1 });
  const maps = [map(0.3), map(0.01), map(0.02), { name: "", error: { code: "x" } }, map(0.05), map(0.04)];
  const verdicts = ["edge", "undecided", "dipolar", null, null, "dipolar"];
  const view = { order: "rv", grouping: "verdict", most: Infinity, verdict: "" };
  const listed = ledgerOf(maps, view, verdicts).map(({ code, indexes }) => [code, ...indexes]);
  assert.deepEqual(listed, [["verdict.dipolar", 2, 5], ["verdict.undecided", 1], ["verdict.edge", 0], ["verdict.none", 4], ["unfitted", 3]]);
  const sorted = ledgerOf(maps, { ...view, order: "verdict", grouping: "none" }, verdicts);
  assert.deepEqual(sorted[0].indexes, [2, 5, 1, 0, 4]);
  const filtered = ledgerOf(maps, { ...view, grouping: "none", verdict: "dipolar" }, verdicts);
  assert.deepEqual(filtered.map(({ indexes }) => indexes), [[2, 5]]);
});

test("what is entered is taken within its limits alone, also those that other settings set", () => {
  const taken = (path, text, settings = {}) => {
    const { value, good } = enteredSetting(path.split("."), text, settings);
    return good ? value : "refused";
  };
  for (const text of ["15, 40", "15,40", "15 40", "15;40", "15,0 40,0"]) assert.deepEqual(taken("errors.skullRatio", text), [15, 40], text);
  assert.deepEqual(taken("errors.skullRatio", "15,5 40"), [15.5, 40]);
  assert.equal(taken("errors.skullRatio", "0"), null);
  for (const text of ["40, 15", "15", "15,40,60", "a, b"]) assert.equal(taken("errors.skullRatio", text), "refused", text);
  assert.equal(taken("limits.ruledOut", "0.9"), "refused", "below what is dipolar unless changed");
  assert.equal(taken("limits.ruledOut", "0.9", { limits: { oneDipole: 0.8 } }), 0.9);
  assert.equal(taken("limits.oneDipole", "1"), "refused");
  assert.equal(taken("limits.oneDipole", "", { limits: { oneDipole: 0.8, ruledOut: 0.9 } }), "refused");
  assert.equal(taken("limits.oneDipole", "", { limits: { oneDipole: 0.8 } }), undefined);
  // 0.5 · 0.9 · √(1 + 0.25²) = 0.4638…
  assert.deepEqual(taken("sources.floor", "0.46, 0.25"), [0.46, 0.25]);
  assert.equal(taken("sources.floor", "0.47, 0.25"), "refused");
  assert.equal(taken("sources.floor", "-0.5, -1.5"), "refused");
  assert.equal(taken("sources.maxEccentricity", "0.5", { sources: { floor: [0.4, 0] } }), "refused");
  assert.equal(taken("sources.draws", "1000.5"), "refused");
});

test("noise of one kind stays when a field of the other is emptied", () => {
  const pair = { singleTrialSd: 10, trials: 100 };
  assert.deepEqual(changedNoise({ sd: 2 }, { sd: 2 }, "trials"), { sd: 2 });
  assert.deepEqual(changedNoise({ sd: 2 }, { sd: 2, singleTrialSd: 10 }, "singleTrialSd"), { sd: 2 });
  assert.deepEqual(changedNoise({ sd: 2 }, { sd: 2, ...pair }, "trials"), pair);
  assert.equal(changedNoise({ sd: 2 }, {}, "sd"), undefined);
  assert.equal(changedNoise(pair, { singleTrialSd: 10 }, "trials"), undefined);
  assert.deepEqual(changedNoise(pair, pair, "sd"), pair);
  assert.deepEqual(changedNoise(pair, { sd: 3, ...pair }, "sd"), { sd: 3 });
});

test("a report says what it is without", () => {
  assert.equal(reportLacksText({ regions: null, populations: false }), "");
  assert.match(reportLacksText({ regions: 1000, populations: false }), /^The report has regions and electrodes to check for tables of up to 1,000 maps/);
  assert.match(reportLacksText({ regions: 1000, populations: true }), /verdicts once .* drawn\. It has regions and/);
});

test("a comma is a decimal mark, but parts the thousands of a count", () => {
  for (const field of TRUST_FIELDS) {
    const { path: [group, key], limits: [least, most], standard, pair } = field;
    if (["draws", "trials", "backgroundSources"].includes(key)) {
      assert.equal(withinLimits(field, "1,000"), 1000, `${group}.${key}`);
      for (const unclear of ["1,5", "1,00", ",000", "1,0000"]) assert.equal(withinLimits(field, unclear), undefined, `${group}.${key}: ${unclear}`);
    } else if (key !== "seed" && !pair) {
      const middle = standard === "" ? Math.min(2.5, most) : Number(standard);
      assert.ok(middle >= least && middle <= most);
      const near = (middle === Math.trunc(middle) ? middle.toFixed(1) : String(middle));
      assert.equal(withinLimits(field, near.replace(".", ",")), middle, `${group}.${key}`);
    }
  }
});

test("the limits and defaults of the fields are the engine's", async () => {
  const { openEngine } = await import(pathToFileURL(`${process.env.INWARD_DIST}/engine/inward.mjs`).href);
  const engine = await openEngine();
  const maps = readFileSync(new URL("../../example_maps/lamp.tsv", import.meta.url), "utf8");
  const study = engine.open({ maps });
  const { settings: defaults } = study.preamble();
  const code = (settings) => {
    try {
      study.with(settings).close();
      return "taken";
    } catch (error) {
      return error.code;
    }
  };
  const beside = { trials: { singleTrialSd: 1 }, singleTrialSd: { trials: 4 }, oneDipole: { ruledOut: 1 }, ruledOut: { oneDipole: 0.5 } };
  let tried = 0;
  for (const field of TRUST_FIELDS) {
    const { path: [group, key], limits: [least, most], standard, pair } = field;
    const name = `${group}.${key}`;
    if (standard !== "") assert.deepEqual(defaults[group][key], withinLimits(field, standard), name);
    else assert.equal(defaults[group]?.[key] ?? null, null, name);
    // Of the floor only what its height may be at least is a limit of its own.
    const given = (value) => (pair ? [value, key === "floor" ? 0 : most] : value);
    const set = (value) => ({ [group]: { ...beside[key], [key]: given(value) } });
    const ends = key === "floor" ? [[least, -0.01]] : [[least, -0.01 * least || -0.01], [most, 0.01 * most]];
    for (const [end, step] of key === "seed" ? [] : ends) {
      const off = ["draws", "trials", "backgroundSources"].includes(key) ? Math.sign(step) : step;
      assert.equal(code(set(end)), "taken", `${name} ${end}`);
      const beyond = code(set(end + off));
      // A count below 0 is no count at all.
      assert.equal(beyond, end + off < 0 && Number.isInteger(end + off) && key === "backgroundSources" ? "settings-unknown" : "setting-range", `${name} ${end + off}`);
      tried++;
    }
  }
  assert.ok(tried > 25, String(tried));
});
