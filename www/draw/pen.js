/**
 * Pictures as SVG: a pen that takes the canvas's own calls, as far as the painters of this folder need them, and leaves
 * elements behind, so that each picture has one painter. Text stays text.
 */

const SVG = "http://www.w3.org/2000/svg";
const DECIMALS = 100;

/** @typedef {Record<string, string | number>} Attributes */

/** @param {number} value CSS pixels */
export function rounded(value) {
  return Math.round(value * DECIMALS) / DECIMALS;
}

/** Whether the way over b is straight on. @param {number[]} a @param {number[]} b @param {number[]} c */
function isStraight(a, b, c) {
  const [along, across] = [
    [c[0] - a[0], c[1] - a[1]],
    [b[0] - a[0], b[1] - a[1]],
  ];
  const length = Math.hypot(...along);
  const on = along[0] * across[0] + along[1] * across[1];
  const off = along[0] * across[1] - along[1] * across[0];
  return length > 0 && on >= 0 && on <= length ** 2 && Math.abs(off) <= STRAIGHT * length;
}

/**
 * @param {string} name
 * @param {Attributes} attributes
 * @param {string} [text]
 */
export function svgElement(name, attributes, text = "") {
  const element = document.createElementNS(SVG, name);
  for (const [key, value] of Object.entries(attributes)) element.setAttribute(key, String(value));
  element.textContent = text;
  return element;
}

/** Widths of words, which an SVG cannot be asked for before it is shown. @type {CanvasRenderingContext2D | null} */
let ruler = null;

/** @param {string} text @param {string} font */
export function textWidth(text, font) {
  ruler ??= document.createElement("canvas").getContext("2d");
  if (ruler === null) return 6 * text.length;
  ruler.font = font;
  return ruler.measureText(text).width;
}

/** What a canvas saves and restores, as far as it is used here. */
const PEN_STATE = /** @type {const} */ (["strokeStyle", "fillStyle", "lineWidth", "globalAlpha", "lineCap", "lineJoin", "font", "textAlign", "textBaseline"]);
/** A point this near to the line between those beside it, in pixels, is left out. */
const STRAIGHT = 0.02;
/** Circles up to this radius are dots. */
const LARGEST_DOT = 3;

export class SvgPen {
  strokeStyle = "black";
  fillStyle = "black";
  lineWidth = 1;
  globalAlpha = 1;
  lineCap = "butt";
  lineJoin = "miter";
  font = "11px sans-serif";
  textAlign = "start";
  textBaseline = "alphabetic";
  /** @type {number[]} */
  #dash = [];
  #path = "";
  /** The last line of the path, and the path without it. @type {{ from: number[], to: number[], before: string } | null} */
  #last = null;
  /** The path as dots, as long as it has no more than circles of one radius. @type {{ radius: number, path: string } | null} */
  #dots = null;
  /** A stroke around letters belongs to the letters that follow. @type {Attributes} */
  #halo = {};
  /** @type {Element} */
  #root;
  /** Where the pen's own origin lies in the drawing, and how large its unit is there. */
  #place = { x: 0, y: 0, unit: 1 };
  /** @type {(() => void)[]} */
  #saved = [];
  #prefix;

  /** @param {Element} root takes what is drawn @param {string} [prefix] of names within it, for drawings that share a page */
  constructor(root, prefix = "") {
    this.#root = root;
    this.#prefix = prefix;
  }

  save() {
    const kept = Object.fromEntries(PEN_STATE.map((name) => [name, this[name]]));
    const [root, place, dash] = [this.#root, this.#place, this.#dash];
    this.#saved.push(() => {
      Object.assign(this, kept);
      [this.#root, this.#place, this.#dash] = [root, place, dash];
    });
  }
  restore() {
    this.#saved.pop()?.();
  }
  /** @param {number} x @param {number} y */
  translate(x, y) {
    this.#place = { ...this.#place, x: this.#x(x), y: this.#y(y) };
  }
  /** The same in both directions. @param {number} unit */
  scale(unit) {
    this.#place = { ...this.#place, unit: unit * this.#place.unit };
  }
  /** What follows, until it is restored, is seen within the path. */
  clip() {
    const name = `${this.#prefix}clip-${(this.#root.closest("svg")?.querySelectorAll("clipPath").length ?? 0) + 1}`;
    const shape = svgElement("clipPath", { id: name });
    shape.append(svgElement("path", { d: this.#path }));
    const inside = svgElement("g", { "clip-path": `url(#${name})` });
    this.#root.append(shape, inside);
    this.#root = inside;
  }
  /** @param {HTMLCanvasElement} image @param {number} x @param {number} y @param {number} width @param {number} height */
  drawImage(image, x, y, width, height) {
    const href = image.toDataURL("image/png");
    this.#add("image", { ...this.#box(x, y, width, height), href, preserveAspectRatio: "none" });
  }

  /** @param {number[]} dash */
  setLineDash(dash) {
    this.#dash = dash;
  }
  beginPath() {
    this.#path = "";
    this.#last = null;
    this.#dots = { radius: 0, path: "" };
  }
  /** @param {number} x @param {number} y */
  moveTo(x, y) {
    const to = [this.#x(x), this.#y(y)];
    this.#path += `M${this.#point(x, y)}`;
    this.#last = { from: to, to, before: this.#path };
  }
  /** @param {number} x @param {number} y */
  lineTo(x, y) {
    this.#dots = null;
    if (this.#path === "") return this.moveTo(x, y);
    const to = [this.#x(x), this.#y(y)];
    const { from, to: end, before } = this.#last ?? { from: to, to, before: "" };
    const straight = this.#last !== null && isStraight(from, end, to);
    if (straight) this.#path = before;
    this.#last = { from: straight ? from : end, to, before: this.#path };
    this.#path += `L${this.#point(x, y)}`;
    // What came before was a whole figure: nothing is straight on from it.
    if (end === to) this.#last.before = this.#path;
  }
  closePath() {
    this.#last = null;
    this.#dots = null;
    this.#path += "Z";
  }
  /** A whole circle. @param {number} x @param {number} y @param {number} radius */
  arc(x, y, radius) {
    const r = this.#size(radius);
    this.#last = null;
    // A dot is a line of next to no length with round ends: a quarter of the letters.
    const dots = this.#dots?.path ?? "";
    this.#dots = dots === "" || this.#dots?.radius === radius ? { radius, path: `${dots}M${this.#point(x, y)}h.01` } : null;
    const start = `M${this.#point(x + radius, y)}`;
    this.#path += `${this.#path.endsWith(start) ? "" : start}a${r} ${r} 0 1 1 ${-2 * r} 0a${r} ${r} 0 1 1 ${2 * r} 0Z`;
  }
  /** @param {number} x @param {number} y @param {number} width @param {number} height */
  fillRect(x, y, width, height) {
    this.#add("rect", { ...this.#box(x, y, width, height), fill: this.fillStyle, ...this.#alpha() });
  }
  fill() {
    const dots = this.#dots;
    if (dots !== null && dots.path !== "" && this.#size(dots.radius) <= LARGEST_DOT) {
      const line = { stroke: this.fillStyle, "stroke-width": this.#size(2 * dots.radius), "stroke-linecap": "round" };
      return this.#add("path", { d: dots.path, fill: "none", ...line, ...this.#alpha() });
    }
    this.#add("path", { d: this.#path, fill: this.fillStyle, ...this.#alpha() });
  }
  stroke() {
    this.#add("path", { d: this.#path, fill: "none", ...this.#line(), ...this.#alpha() });
  }
  /** @param {string} text */
  measureText(text) {
    return { width: textWidth(text, this.font) };
  }
  strokeText() {
    this.#halo = { ...this.#line(), "paint-order": "stroke" };
  }
  /** @param {string} text @param {number} x @param {number} y @param {number} [most] the width there is */
  fillText(text, x, y, most = Infinity) {
    const [, weight = "", size = "11", family = "sans-serif"] = /^(\d+ )?([\d.]+)px (.+)$/.exec(this.font) ?? [];
    const down = this.textBaseline === "middle" ? 0.36 * Number(size) : 0;
    const anchors = /** @type {Record<string, string>} */ ({ center: "middle", right: "end" });
    this.#add(
      "text",
      {
        x: rounded(this.#x(x)),
        y: rounded(this.#y(y + down)),
        fill: this.fillStyle,
        "font-family": family,
        "font-size": this.#size(Number(size)),
        ...(weight === "" ? {} : { "font-weight": weight.trim() }),
        ...(anchors[this.textAlign] === undefined ? {} : { "text-anchor": anchors[this.textAlign] }),
        ...(this.measureText(text).width > most ? { textLength: this.#size(most), lengthAdjust: "spacingAndGlyphs" } : {}),
        ...this.#halo,
        ...this.#alpha(),
      },
      text,
    );
    this.#halo = {};
  }

  /** @param {number} x */
  #x(x) {
    return this.#place.x + this.#place.unit * x;
  }
  /** @param {number} y */
  #y(y) {
    return this.#place.y + this.#place.unit * y;
  }
  /** @param {number} length */
  #size(length) {
    return rounded(this.#place.unit * length);
  }
  /** @param {number} x @param {number} y */
  #point(x, y) {
    return `${rounded(this.#x(x))} ${rounded(this.#y(y))}`;
  }
  /** @param {number} x @param {number} y @param {number} width @param {number} height @returns {Attributes} */
  #box(x, y, width, height) {
    return { x: rounded(this.#x(x)), y: rounded(this.#y(y)), width: this.#size(width), height: this.#size(height) };
  }
  /** @returns {Attributes} */
  #line() {
    return {
      stroke: this.strokeStyle,
      "stroke-width": this.#size(this.lineWidth),
      ...(this.#dash.length > 0 ? { "stroke-dasharray": this.#dash.map((length) => this.#size(length)).join(" ") } : {}),
      ...(this.lineCap === "round" ? { "stroke-linecap": "round" } : {}),
      ...(this.lineJoin === "round" ? { "stroke-linejoin": "round" } : {}),
    };
  }
  /** @returns {Attributes} */
  #alpha() {
    return this.globalAlpha === 1 ? {} : { opacity: this.globalAlpha };
  }
  /** @param {string} name @param {Attributes} attributes @param {string} [text] */
  #add(name, attributes, text) {
    this.#root.append(svgElement(name, attributes, text));
  }
}
