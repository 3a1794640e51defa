// The card of a chosen place: what the run says there, a magnified picture, and where its Jacobian lies in the plane of
// trace and determinant.

import { make, draw, number, per } from "./words.js";

export class Card {
  #el = document.getElementById("card");
  #close;

  // close() is called when the reader closes the card.
  constructor(close) {
    this.#close = close;
    this.#el.addEventListener("keydown", (e) => { if (e.key === "Escape") this.hide(true); });
  }

  hide(tell = false) {
    this.#el.hidden = true;
    this.#el.replaceChildren();
    if (tell) this.#close();
  }

  // show fills the card with a probe's answer; point is the critical point at the place, or null.
  show(probe, point) {
    const L = probe.run.length_unit ?? "", T = probe.run.tau_unit ?? "", P = probe.run.p_unit ?? "";
    const title = point ? `${point.id}: ${point.type}${point.sense === "neutral" ? "" : ` of ${point.sense}`}` : "A place on the surface";
    const j = point ?? probe;
    const rows = [
      ["Position", `${probe.position.map((x) => number(x)).join(", ")} ${L}`],
      ["Wall shear |tau|", point ? `0 by the fit, ${number(probe.tau_magnitude, T)} interpolated` : number(probe.tau_magnitude, T)],
      ["tau", `${probe.tau.map((x) => number(x)).join(", ")} ${T}`],
      ["Pressure p", probe.p === null || probe.p === undefined ? "not in this run" : number(probe.p, P)],
      ["Coefficient cp", probe.cp === null || probe.cp === undefined ? "not in this run" : number(probe.cp)],
    ];
    if (j.jacobian) {
      const G = per(T, L);
      rows.push(
        ["Jacobian", `${j.jacobian.map((r) => `[${r.map((x) => number(x)).join(", ")}]`).join(" ")} ${G}`],
        ["Eigenvalues", `${j.eigenvalues.map(complex).join(" and ")} ${G}`],
        ["Trace", number(j.trace, G)],
        ["Determinant", number(j.determinant, G && `(${G})\u00b2`)],
      );
    }
    if (point) {
      rows.push(
        ["Type", point.type], ["Sense", point.sense], ["Index", number(point.half ? point.index / 2 : point.index)],
        ["Robustness", point.robustness === null ? "uncancellable: no disturbance below the largest stress removes it" : number(point.robustness, T)],
        ["Confidence", `${Math.round(100 * point.confidence)}\u202f%`],
      );
    }
    const list = make("dl", {}, ...rows.flatMap(([k, v]) => [make("dt", {}, k), make("dd", {}, v)]));
    const text = () => [title, ...rows.map(([k, v]) => `${k}: ${v}`)].join("\n");
    const loupe = new Loupe(title, L);
    this.#el.replaceChildren(
      make("div", { class: "row" }, make("h2", {}, title),
        make("button", { type: "button", onclick: (e) => copy(text(), e.target) }, "Copy"),
        make("button", { type: "button", "aria-label": "Close the card", onclick: () => this.hide(true) }, "Close")),
      make("div", { class: "pair" }, loupe.element, j.jacobian ? chart(j.trace, j.determinant) : ""), list,
      (point ?? probe).note ? make("p", { class: "note" }, sentence((point ?? probe).note)) : "");
    this.#el.hidden = false;
    return loupe;
  }
}

// Loupe is the round magnifier: a picture of the place against its normal, with the axes of its Jacobian.
class Loupe {
  #canvas; #scale; #unit; #title;

  constructor(title, unit) {
    this.#title = title;
    this.#unit = unit;
    this.pixels = Math.round(loupeSize * Math.min(devicePixelRatio || 1, 2));
    this.#canvas = make("canvas", { class: "loupe", width: this.pixels, height: this.pixels, role: "img" });
    this.#scale = make("figcaption", {});
    this.element = make("figure", {}, this.#canvas, this.#scale);
  }

  // draw takes the worker's picture.
  draw({ block, width, height, shows, axes }) {
    const c = this.#canvas.getContext("2d");
    c.putImageData(new ImageData(new Uint8ClampedArray(block), width, height), 0, 0);
    const r = width / 2;
    c.lineCap = "round";
    for (const [x, y] of axes) {
      for (const [style, w] of [["rgb(255 255 255 / 80%)", 5], ["#20303a", 2]]) {
        c.strokeStyle = style;
        c.lineWidth = (w * width) / loupeSize;
        c.beginPath();
        for (const s of [-1, 1]) {
          c.moveTo(r + s * x * r * 0.18, r + s * y * r * 0.18);
          c.lineTo(r + s * x * r * 0.7, r + s * y * r * 0.7);
        }
        c.stroke();
      }
    }
    this.#scale.textContent = `${number(shows, this.#unit)} across${axes.length ? "; strokes: eigenvectors" : ""}`;
    this.#canvas.setAttribute("aria-label", `${this.#title}, magnified: ${this.#scale.textContent}`);
  }
}

const loupeSize = 148; // CSS pixels

const sentence = (s) => s[0].toUpperCase() + s.slice(1) + ".";

function complex([re, im]) {
  if (im === 0) return number(re);
  return `${number(re)} ${im < 0 ? "\u2212" : "+"} ${number(Math.abs(im))}i`;
}

async function copy(text, button) {
  try {
    await navigator.clipboard.writeText(text);
    button.textContent = "Copied";
  } catch {
    const area = make("textarea", { readonly: true, rows: 8, "aria-label": "Text of the card" });
    area.value = text;
    button.replaceWith(area);
    area.select();
  }
}

// chart draws the plane of trace and determinant, each scaled so that the point's distance from the middle tells only
// direction: what matters is on which side of the axes and the parabola it lies.
function chart(trace, det) {
  const W = 150, H = 150, x0 = W / 2, y0 = 98;
  const scale = Math.max(Math.abs(trace), 2 * Math.sqrt(Math.abs(det)), 1e-300);
  const t = trace / scale, d = det / (scale * scale);
  const px = (u) => x0 + u * 60, py = (v) => y0 - v * 230;
  let curve = "";
  for (let u = -1.2; u <= 1.2001; u += 0.05) curve += `${curve ? "L" : "M"}${px(u).toFixed(1)} ${py(u * u / 4).toFixed(1)}`;
  const label = (x, y, s, anchor = "middle") => {
    const e = draw("text", { x, y, "text-anchor": anchor, "font-size": 9.5, fill: "currentColor" });
    e.textContent = s;
    return e;
  };
  const svg = draw("svg", { viewBox: `0 0 ${W} ${H}`, width: W, height: H, role: "img",
    "aria-label": "Plane of trace and determinant with the parabola between nodes and foci; a dot marks this place" },
  draw("rect", { x: 0.5, y: 0.5, width: W - 1, height: H - 1, fill: "var(--field)", stroke: "var(--rule)" }),
  draw("line", { x1: 4, x2: W - 4, y1: y0, y2: y0, stroke: "currentColor", opacity: 0.5 }),
  draw("line", { x1: x0, x2: x0, y1: 16, y2: H - 26, stroke: "currentColor", opacity: 0.3 }),
  draw("path", { d: curve, fill: "none", stroke: "currentColor", "stroke-dasharray": "4 3" }),
  label(x0, 12, "determinant"), label(x0 - 5, 34, "foci", "end"), label(x0 + 5, 34, "foci", "start"),
  label(4, y0 - 6, "nodes", "start"), label(W - 4, y0 - 6, "nodes", "end"), label(x0 - 22, y0 + 14, "saddles", "end"),
  label(4, H - 16, "\u2190 separation", "start"), label(W - 4, H - 5, "attachment \u2192", "end"), label(W - 4, y0 + 11, "trace", "end"),
  draw("circle", { cx: px(t), cy: Math.max(20, Math.min(H - 32, py(d))), r: 4.5, fill: "var(--mark)", stroke: "var(--ink)" }));
  return make("figure", {}, svg, make("figcaption", {}, "Kind of the Jacobian"));
}
