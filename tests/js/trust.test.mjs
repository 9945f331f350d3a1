// What is drawn of a region and of reference populations, and how maps are listed by verdict. Run by tests/trust.rs.
import assert from "node:assert/strict";
import { test } from "node:test";
import { densityCounts } from "../../www/draw/density.js";
import { seenFrom } from "../../www/draw/head.js";
import { outlineOf } from "../../www/draw/region.js";
import { ledgerOf } from "../../www/views/ledger.js";

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
