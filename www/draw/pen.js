/**
 * Pictures as SVG: a pen that takes the canvas's own calls, as far as the painters of this folder need them, and leaves
 * elements behind, so that each picture has one painter. Text stays text.
 */

const SVG = "http://www.w3.org/2000/svg";
const DECIMALS = 100;

/** @typedef {Record<string, string | number>} Attributes */

/** @param {number} value CSS pixels */
function rounded(value) {
  return Math.round(value * DECIMALS) / DECIMALS;
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
  /** A stroke around letters belongs to the letters that follow. @type {Attributes} */
  #halo = {};
  /** @type {Element} */
  #root;

  /** @param {Element} root takes what is drawn */
  constructor(root) {
    this.#root = root;
  }

  /** @param {number[]} dash */
  setLineDash(dash) {
    this.#dash = dash;
  }
  beginPath() {
    this.#path = "";
  }
  /** @param {number} x @param {number} y */
  moveTo(x, y) {
    this.#path += `M${rounded(x)} ${rounded(y)}`;
  }
  /** @param {number} x @param {number} y */
  lineTo(x, y) {
    this.#path += `${this.#path === "" ? "M" : "L"}${rounded(x)} ${rounded(y)}`;
  }
  closePath() {
    this.#path += "Z";
  }
  /** A whole circle. @param {number} x @param {number} y @param {number} radius */
  arc(x, y, radius) {
    const r = rounded(radius);
    this.#path += `M${rounded(x + radius)} ${rounded(y)}a${r} ${r} 0 1 1 ${-2 * r} 0a${r} ${r} 0 1 1 ${2 * r} 0Z`;
  }
  /** @param {number} x @param {number} y @param {number} width @param {number} height */
  fillRect(x, y, width, height) {
    const place = { x: rounded(x), y: rounded(y), width: rounded(width), height: rounded(height) };
    this.#add("rect", { ...place, fill: this.fillStyle, ...this.#alpha() });
  }
  fill() {
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
        x: rounded(x),
        y: rounded(y + down),
        fill: this.fillStyle,
        "font-family": family,
        "font-size": size,
        ...(weight === "" ? {} : { "font-weight": weight.trim() }),
        ...(anchors[this.textAlign] === undefined ? {} : { "text-anchor": anchors[this.textAlign] }),
        ...(this.measureText(text).width > most ? { textLength: rounded(most), lengthAdjust: "spacingAndGlyphs" } : {}),
        ...this.#halo,
        ...this.#alpha(),
      },
      text,
    );
    this.#halo = {};
  }

  /** @returns {Attributes} */
  #line() {
    return {
      stroke: this.strokeStyle,
      "stroke-width": rounded(this.lineWidth),
      ...(this.#dash.length > 0 ? { "stroke-dasharray": this.#dash.join(" ") } : {}),
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
