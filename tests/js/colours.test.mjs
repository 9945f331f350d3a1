// The colours of values and of words, by computation alone. Run by tests/colours.rs.
//
// Nothing of the page's own arithmetic is used: sRGB is turned into OKLab (Ottosson 2020), into what people with a
// colour-vision deficiency see (Machado, Oliveira & Fernandes 2009; Viénot, Brettel & Mollon 1999) and into luminance here.
import assert from "node:assert/strict";
import { readFileSync, readdirSync } from "node:fs";
import { test } from "node:test";

const source = (path) => readFileSync(new URL(`../../www/${path}`, import.meta.url), "utf8");
// As text: the page's files are modules only by how they are used, which not every version of Node guesses.
const { colourOfShare, colourTable } = await import(`data:text/javascript,${encodeURIComponent(source("draw/scale.js"))}`);

/** What draws decompositions imports the scale; joined, both are one module. */
const joined = source("draw/scale.js") + source("draw/series.js").replace(/^import .*$/m, "");
const { rvColour, RV_MOST, seriesColour, seriesDash } = await import(`data:text/javascript,${encodeURIComponent(joined)}`);

const THEMES = ["light", "dark"];
const GRAIN = 20; // shares on each side
const SHARES = Array.from({ length: GRAIN + 1 }, (_, k) => k / GRAIN);
const ROUNDING = 0.003; // what eight bits a channel can do to an OKLab distance

const product = (matrix, vector) => matrix.map((row) => row.reduce((sum, x, i) => sum + x * vector[i], 0));
const distance = (a, b) => Math.hypot(...a.map((x, i) => x - b[i]));

/** Linear light of an sRGB colour, 0 to 1 (IEC 61966-2-1). */
const linear = (colour) =>
  colour.map((byte) => (byte / 255 <= 0.04045 ? byte / 255 / 12.92 : ((byte / 255 + 0.055) / 1.055) ** 2.4));
/** CIE luminance, 1 for white. */
const luminance = (light) => 0.2126 * light[0] + 0.7152 * light[1] + 0.0722 * light[2];
/** CIE 1976 lightness, 0 to 100: what is left of a colour in a grey print. */
const greyLightness = (light) => {
  const y = luminance(light);
  return y > 216 / 24389 ? 116 * Math.cbrt(y) - 16 : (24389 / 27) * y;
};

// Björn Ottosson, "A perceptual color space for image processing", 2020.
const LMS_OF_RGB = [
  [0.4122214708, 0.5363325363, 0.0514459929],
  [0.2119034982, 0.6806995451, 0.1073969566],
  [0.0883024619, 0.2817188376, 0.6299787005],
];
const LAB_OF_LMS = [
  [0.2104542553, 0.793617785, -0.0040720468],
  [1.9779984951, -2.428592205, 0.4505937099],
  [0.0259040371, 0.7827717662, -0.808675766],
];
const oklab = (light) => product(LAB_OF_LMS, product(LMS_OF_RGB, light).map(Math.cbrt));

// Machado, Oliveira & Fernandes 2009, severity 1, on linear light. The values are from memory.
const MACHADO = {
  protanopia: [
    [0.152286, 1.052583, -0.204868],
    [0.114503, 0.786281, 0.099216],
    [-0.003882, -0.048116, 1.051998],
  ],
  deuteranopia: [
    [0.367322, 0.860646, -0.227968],
    [0.280085, 0.672501, 0.047413],
    [-0.01182, 0.04294, 0.968881],
  ],
  tritanopia: [
    [1.255528, -0.076749, -0.178779],
    [-0.078411, 0.930809, 0.147602],
    [0.004733, 0.691367, 0.3039],
  ],
};

/**
 * Viénot, Brettel & Mollon 1999: the missing cone's signal is the combination of the other two that leaves white and blue
 * as they are. Cone signals of linear light by their matrix (from memory).
 */
function vienot(missing) {
  const cones = [
    [17.8824, 43.5161, 4.11935],
    [3.45565, 27.1554, 3.86714],
    [0.0299566, 0.184309, 1.46709],
  ];
  const [p, q] = [0, 1, 2].filter((cone) => cone !== missing);
  const [white, blue] = [[1, 1, 1], [0, 0, 1]].map((light) => product(cones, light));
  const det = white[p] * blue[q] - white[q] * blue[p];
  const a = (white[missing] * blue[q] - white[q] * blue[missing]) / det;
  const b = (white[p] * blue[missing] - white[missing] * blue[p]) / det;
  const inverse = inverted(cones);
  return (light) => {
    const seen = product(cones, light);
    seen[missing] = a * seen[p] + b * seen[q];
    return product(inverse, seen);
  };
}

function inverted([[a, b, c], [d, e, f], [g, h, i]]) {
  const det = a * (e * i - f * h) - b * (d * i - f * g) + c * (d * h - e * g);
  return [
    [e * i - f * h, c * h - b * i, b * f - c * e],
    [f * g - d * i, a * i - c * g, c * d - a * f],
    [d * h - e * g, b * g - a * h, a * e - b * d],
  ].map((row) => row.map((x) => x / det));
}

const within = (light) => light.map((channel) => Math.min(1, Math.max(0, channel)));
const EYES = {
  ...Object.fromEntries(
    Object.entries(MACHADO).map(([name, matrix]) => [`${name} (Machado)`, (light) => within(product(matrix, light))]),
  ),
  "protanopia (Viénot)": (light) => within(vienot(0)(light)),
  "deuteranopia (Viénot)": (light) => within(vienot(1)(light)),
};

/** From this share of the limit on the two signs must look different by colour alone; below it contour lines tell them. */
const TOLD_APART_FROM = 0.4;
/** About twice what can just be seen side by side (a common rule of thumb for OKLab is 0.02). */
const APART = 0.04;

/** What is wrong with a scale: one line per fault. */
function faults(scale, theme) {
  const found = [];
  const expect = (holds, what) => holds || found.push(`${theme}: ${what}`);
  const lab = (share, eye = (light) => light) => oklab(eye(linear(scale(share, theme))));
  const ends = [lab(-1), lab(1)];
  expect(ends.every((end) => Math.abs(end[0] - lab(0)[0]) > 0.4), "the ends are near the middle in lightness");
  expect(Math.hypot(lab(0)[1], lab(0)[2]) < 0.02, "the middle is coloured");
  for (const sign of [-1, 1]) {
    const way = SHARES.map((share) => lab(sign * share));
    const steps = way.slice(1).map((point, k) => distance(point, way[k]));
    const rises = way.slice(1).map((point, k) => point[0] - way[k][0]);
    expect(new Set(rises.map(Math.sign)).size === 1 && rises[0] !== 0, `lightness turns back on the side of ${sign}`);
    const mean = steps.reduce((a, b) => a + b) / steps.length;
    expect(steps.every((step) => Math.abs(step - mean) < ROUNDING), `steps from ${Math.min(...steps)} to ${Math.max(...steps)}`);
    // A colour outside of sRGB is cut off, which bends the way.
    const chord = distance(way[0], way[GRAIN]);
    expect(mean * GRAIN < chord * 1.02, `the way to the end is bent: ${mean * GRAIN} for ${chord}`);
    const greys = SHARES.map((share) => greyLightness(linear(scale(sign * share, theme))));
    const falls = greys.slice(1).map((grey, k) => grey - greys[k]);
    expect(new Set(falls.map(Math.sign)).size === 1, `grey turns back on the side of ${sign}`);
    expect(Math.min(...falls.map(Math.abs)) > 1, `grey hardly changes: ${Math.min(...falls.map(Math.abs))}`);
  }
  for (const share of SHARES) {
    expect(Math.abs(lab(share)[0] - lab(-share)[0]) < ROUNDING, `±${share} differ in lightness`);
    if (share < TOLD_APART_FROM) continue;
    for (const [name, eye] of Object.entries({ "usual sight": undefined, ...EYES })) {
      const apart = distance(lab(share, eye), lab(-share, eye));
      expect(apart > APART, `±${share} are ${apart.toFixed(3)} apart for ${name}`);
    }
  }
  return found;
}

test("the tools are right where the answer is known", () => {
  const white = oklab(linear([255, 255, 255]));
  assert.ok(distance(white, [1, 0, 0]) < 1e-6, `white is ${white}`);
  // Ottosson's table gives red as L 0.628, a 0.225, b 0.126.
  assert.ok(distance(oklab(linear([255, 0, 0])), [0.628, 0.225, 0.126]) < 1e-3);
  for (const [name, matrix] of Object.entries(MACHADO))
    for (const row of matrix) assert.ok(Math.abs(row[0] + row[1] + row[2] - 1) < 2e-6, `${name} leaves grey grey`);
  for (const missing of [0, 1])
    for (const light of [[1, 1, 1], [0, 0, 1], [0.3, 0.3, 0.3]])
      assert.ok(distance(vienot(missing)(light), light) < 1e-9, "grey and blue stay");
  // Green and red of equal lightness that dichromats confuse: far apart for usual sight, near for theirs.
  const [red, green] = [[200, 80, 60], [115, 135, 40]].map(linear);
  const apart = distance(oklab(red), oklab(green));
  for (const name of ["deuteranopia (Machado)", "deuteranopia (Viénot)"])
    assert.ok(distance(oklab(EYES[name](red)), oklab(EYES[name](green))) < apart / 2, name);
});

test("the scale is even, mirrored, within sRGB, and tells the signs apart", () => {
  for (const theme of THEMES) {
    assert.deepEqual(faults(colourOfShare, theme), []);
    const nearest = Object.entries(EYES).map(([name, eye]) => {
      const seen = [1, -1].map((sign) => oklab(eye(linear(colourOfShare(sign * TOLD_APART_FROM, theme)))));
      return `${name} ${distance(...seen).toFixed(3)}`;
    });
    console.log(`${theme}, ±${TOLD_APART_FROM}: ${nearest.join(", ")}`);
  }
});

test("the table that paints the maps is the scale", () => {
  for (const theme of THEMES) {
    const table = colourTable(theme, 41);
    for (let k = 0; k <= 40; k++) assert.deepEqual([...table.slice(3 * k, 3 * k + 3)], colourOfShare(k / 20 - 1, theme));
  }
});

test("each fault of a scale is found", () => {
  const eased = (share) => Math.sign(share) * share * share;
  const mutants = {
    steps: (share, theme) => colourOfShare(eased(share), theme),
    "turns back": (share, theme) => colourOfShare(Math.abs(share) > 0.85 ? share * 0.7 : share, theme),
    "in lightness": (share, theme) => colourOfShare(share < 0 ? share * 0.8 : share, theme),
    "apart for usual sight": (share, theme) => colourOfShare(Math.abs(share), theme),
    "apart for deuteranopia": (share) => {
      // Red and green of equal luminance: nearly one colour without the middle cones.
      const end = share < 0 ? [96, 120, 40] : [170, 84, 52];
      return end.map((byte) => Math.round(250 + (byte - 250) * Math.abs(share)));
    },
    "grey hardly changes": (share, theme) => colourOfShare(share * 0.2, theme),
    bent: (share, theme) => {
      const [red, green, blue] = colourOfShare(share, theme);
      return [Math.min(255, red * (1 + Math.abs(share))), green, Math.max(0, blue - 90 * Math.sin(Math.PI * Math.abs(share)))];
    },
  };
  for (const [fault, mutant] of Object.entries(mutants))
    for (const theme of THEMES) {
      const found = faults(mutant, theme);
      assert.ok(found.some((line) => line.includes(fault)), `${theme}: ${fault} is not among ${JSON.stringify(found)}`);
    }
});

/** Colours of the style sheets: name, then one per theme. */
function palette(css) {
  const colours = new Map();
  for (const [, name, light, dark] of css.matchAll(/--([\w-]+):\s*light-dark\((#[\da-f]{6}),\s*(#[\da-f]{6})\)/gi))
    colours.set(name, { light, dark });
  return colours;
}

const bytes = (hex) => [1, 3, 5].map((at) => parseInt(hex.slice(at, at + 2), 16));
/** Contrast as WCAG 2 defines it, 1 to 21. */
function contrast(a, b) {
  const [high, low] = [a, b].map((colour) => luminance(linear(colour))).sort((x, y) => y - x);
  return (high + 0.05) / (low + 0.05);
}

const SERIES = 6;
const bytesOf = (css) => css.match(/\d+/g).map(Number);

/** What is wrong with colours that tell decompositions apart. */
function confusions(colours, theme, papers) {
  const found = [];
  for (const [name, eye] of Object.entries({ "usual sight": (light) => light, ...EYES })) {
    const seen = colours.map((colour) => oklab(eye(linear(colour))));
    seen.forEach((a, i) => seen.slice(0, i).forEach((b, j) => {
      // Twice what the signs of a map keep; the first three, which most figures have, keep more.
      const least = i < 3 ? 0.13 : 0.08;
      if (distance(a, b) < least) found.push(`${theme}: ${i} and ${j} are ${distance(a, b).toFixed(3)} apart for ${name}`);
    }));
  }
  for (const paper of papers)
    colours.forEach((colour, k) => contrast(colour, paper) < 3 && found.push(`${theme}: ${k} hardly stands out`));
  return found;
}

test("decompositions are told apart by colour and by dash, and residual variance is even", () => {
  const papers = palette(source("style/1-paper.css"));
  for (const theme of THEMES) {
    const colours = Array.from({ length: SERIES }, (_, k) => bytesOf(seriesColour(k, theme)));
    const ground = [bytes(papers.get("paper")[theme])];
    assert.deepEqual(confusions(colours, theme, ground), []);
    assert.notDeepEqual(confusions([...colours.slice(0, -1), colours[0]], theme, ground), [], "a repeated colour is found");
    const pairs = Array.from({ length: 42 }, (_, k) => `${seriesColour(k, theme)} ${seriesDash(k)}`);
    assert.equal(new Set(pairs).size, 42, "no line is like another");

    const way = Array.from({ length: 21 }, (_, k) => oklab(linear(bytesOf(rvColour((RV_MOST * k) / 20, theme)))));
    const steps = way.slice(1).map((point, k) => distance(point, way[k]));
    const mean = steps.reduce((a, b) => a + b) / steps.length;
    assert.ok(steps.every((step) => Math.abs(step - mean) < 1.5 * ROUNDING), `${theme}: steps ${steps}`);
    const rises = new Set(way.slice(1).map((point, k) => Math.sign(point[0] - way[k][0])));
    assert.equal(rises.size, 1, "lightness runs one way");
    assert.equal(rvColour(0.9, theme), rvColour(RV_MOST, theme));
  }
});

const PAPERS = ["paper", "raised"];
const WORDS = ["ink", "quiet", "accent", "warm"];
const EDGES = ["field-line"];
const ORNAMENT = ["line"];

test("words and controls stand out from their ground", () => {
  const sheets = readdirSync(new URL("../../www/style", import.meta.url));
  // A report is a page of its own, with fewer colours.
  const palettes = [
    { files: sheets.filter((file) => file !== "report.css"), papers: PAPERS, words: WORDS, edges: EDGES },
    { files: ["report.css"], papers: ["paper"], words: ["ink", "quiet"], edges: [] },
  ];
  const worst = {};
  for (const { files, papers, words, edges } of palettes) {
    const colours = palette(files.map((file) => source(`style/${file}`)).join("\n"));
    assert.deepEqual([...colours.keys()].sort(), [...papers, ...words, ...edges, ...ORNAMENT].sort(), "every colour has a duty");
    for (const theme of THEMES)
      for (const ground of papers) {
        const check = (names, least) => {
          for (const name of names) {
            const found = contrast(bytes(colours.get(name)[theme]), bytes(colours.get(ground)[theme]));
            assert.ok(found >= least, `${name} on ${ground}, ${theme}: ${found.toFixed(2)}, at least ${least}`);
            worst[least] = Math.min(worst[least] ?? 21, found);
          }
        };
        check(words, 4.5);
        check(edges, 3);
      }
  }
  console.log("lowest contrast of words and of edges of controls:", worst);
  assert.ok(contrast(bytes("#777777"), bytes("#ffffff")) < 4.5, "a grey just too light is found");
});

test("no style sheet holds a colour that is not checked", () => {
  for (const file of readdirSync(new URL("../../www/style", import.meta.url))) {
    const rest = source(`style/${file}`)
      .replace(/--[\w-]+:\s*light-dark\([^)]*\)/g, "")
      .replace(/--(paper|raised):\s*#fff/g, "");
    assert.doesNotMatch(rest, /#[\da-f]{3,8}\b|\b(rgb|hsl|oklch|oklab|lab|lch)a?\(/i, file);
  }
});
