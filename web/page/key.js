// The key at the foot of the stage: colours with their values, the scale, the directions, and what marks and lines mean.

import { make, draw, number } from "./words.js";

const titles = { cp: "Pressure coefficient cp", p: "Pressure p", tau: "Wall shear stress |tau|" };
const barWidth = 170; // CSS pixels, as in the style sheet

export class Key {
  #colours = document.getElementById("key-colours");
  #scale = document.getElementById("key-scale");
  #axes = document.getElementById("key-axes");
  #last = "";

  constructor() {
    document.getElementById("key-marks").replaceChildren(...signs.map(([shape, text]) =>
      make("li", {}, sign(shape), text)));
  }

  // show takes the key of a frame.
  show(key) {
    this.#showScale(key.pixel, key.length);
    this.#showAxes(key.axes);
    const same = `${key.colour} ${key.unit} ${key.low} ${key.high} ${key.table}`;
    if (same === this.#last) return;
    this.#last = same;
    this.#showColours(key);
  }

  #showColours(key) {
    if (key.colour === "none" || key.colour === "basins") return this.#colours.replaceChildren();
    const bytes = Uint8Array.from(atob(key.table), (c) => c.charCodeAt(0));
    const canvas = make("canvas", { width: 255, height: 1, "aria-hidden": "true" });
    const image = new ImageData(255, 1);
    for (let i = 0; i < 255; i++) {
      for (let k = 0; k < 3; k++) image.data[4 * i + k] = bytes[3 * (i + 1) + k];
      image.data[4 * i + 3] = 255;
    }
    canvas.getContext("2d").putImageData(image, 0, 0);
    const step = niceStep((key.high - key.low) / 4);
    const ticks = [];
    for (let n = Math.ceil(key.low / step - 1e-9); n * step <= key.high + 1e-9 * step; n++) {
      const at = ((n * step - key.low) / (key.high - key.low)) * barWidth;
      ticks.push(make("i", { style: `left:${at}px` }, number(Number((n * step).toPrecision(6)))));
    }
    const title = titles[key.colour] + (key.unit ? ` [${key.unit}]` : "");
    this.#colours.replaceChildren(make("p", {}, title), canvas, make("div", { class: "ticks" }, ...ticks));
    this.#colours.setAttribute("aria-label", `${title}, colours from ${number(key.low)} to ${number(key.high)}`);
  }

  #showScale(pixel, unit) {
    if (!(pixel > 0)) return;
    const length = niceStep(50 * pixel), wide = length / pixel;
    this.#scale.firstElementChild.style.width = `${wide}px`;
    this.#scale.lastElementChild.textContent = `${number(length, unit || "units of the file")}`;
  }

  #showAxes(axes) {
    const parts = [];
    for (const [i, [x, y]] of axes.entries()) {
      const far = { x: 24 + 17 * x, y: 24 + 17 * y };
      parts.push(draw("line", { x1: 24, y1: 24, x2: far.x, y2: far.y, stroke: "currentColor", "stroke-width": 1.4 }));
      const label = draw("text", { x: 24 + 22 * x, y: 24 + 22 * y + 3.5, "text-anchor": "middle", "font-size": 11, fill: "currentColor" });
      label.textContent = "xyz"[i];
      if (Math.hypot(x, y) > 0.25) parts.push(label);
    }
    this.#axes.replaceChildren(...parts);
  }
}

// niceStep returns 1, 2 or 5 times a power of ten, at least x.
function niceStep(x) {
  const power = 10 ** Math.floor(Math.log10(x));
  return [1, 2, 5, 10].map((k) => k * power).find((s) => s >= x * (1 - 1e-9));
}

// What the marks and lines of a picture mean; the forms are those of package render.
const signs = [
  ["node", "node"], ["focus", "focus"], ["saddle", "saddle"], ["degenerate", "degenerate"],
  ["filled", "filled: separation"], ["hollow", "hollow: attachment"], ["half", "half: neutral"], ["thin", "line of neither"],
  ["unbroken", "separation line"], ["dashed", "attachment line"], ["barred", "into or out of a focus"],
  ["dotted", "open line"], ["ringed", "closed orbit"], ["doubt", "in doubt"],
];

const red = "var(--separation)", green = "var(--attachment)";
const shapes = {
  node: () => [draw("circle", { cx: 9, cy: 7, r: 4.4, fill: "currentColor" })],
  focus: () => [draw("circle", { cx: 9, cy: 7, r: 3.4, fill: "currentColor" }),
    draw("path", { d: "M9.9 7A2.6 2.6 0 0 1 15.1 7M8.1 7A2.6 2.6 0 0 1 2.9 7", fill: "none", stroke: "currentColor", "stroke-width": 1.8, "stroke-linecap": "round" })],
  saddle: () => [draw("path", { d: "M4 2Q9 5.6 14 2Q10.4 7 14 12Q9 8.4 4 12Q7.6 7 4 2Z", fill: "currentColor", stroke: "currentColor", "stroke-width": 1, "stroke-linejoin": "round" })],
  degenerate: () => [draw("rect", { x: 5, y: 3, width: 8, height: 8, fill: "currentColor" })],
  filled: () => [draw("circle", { cx: 9, cy: 7, r: 4.4, fill: red })],
  hollow: () => [draw("circle", { cx: 9, cy: 7, r: 3.8, fill: "var(--field)", stroke: green, "stroke-width": 1.8 })],
  half: () => [draw("circle", { cx: 9, cy: 7, r: 3.8, fill: "var(--field)", stroke: "currentColor", "stroke-width": 1.6 }),
    draw("path", { d: "M9 3.2a3.8 3.8 0 0 0 0 7.6Z", fill: "currentColor" })],
  thin: () => [draw("line", { x1: 0, x2: 18, y1: 7, y2: 7, stroke: "currentColor", "stroke-width": 1 })],
  dotted: () => [draw("line", { x1: 0, x2: 18, y1: 7, y2: 7, stroke: red, "stroke-width": 1.8 }),
    draw("circle", { cx: 5, cy: 7, r: 2.4, fill: red }), draw("circle", { cx: 13, cy: 7, r: 2.4, fill: red })],
  barred: () => [draw("path", { d: "M0 7H18M5 3.6V10.4M13 3.6V10.4", fill: "none", stroke: red, "stroke-width": 1.8 })],
  ringed: () => [draw("line", { x1: 0, x2: 18, y1: 7, y2: 7, stroke: red, "stroke-width": 1.8 }),
    draw("circle", { cx: 9, cy: 7, r: 2.6, fill: "var(--field)", stroke: red, "stroke-width": 1.6 })],
  doubt: () => {
    const q = draw("text", { x: 9, y: 11.5, "text-anchor": "middle", "font-size": 12, fill: "currentColor" });
    q.textContent = "?";
    return [q];
  },
  unbroken: () => [draw("line", { x1: 0, x2: 18, y1: 7, y2: 7, stroke: red, "stroke-width": 2.2 })],
  dashed: () => [draw("line", { x1: 0, x2: 18, y1: 7, y2: 7, stroke: green, "stroke-width": 2.2, "stroke-dasharray": "5 2.5" })],
};

const sign = (shape) => draw("svg", { viewBox: "0 0 18 14", width: 18, height: 14, "aria-hidden": "true" }, ...shapes[shape]());
