// The ledger: an account book of the critical points, its foot, and the noise floor.

import { make, draw, number } from "./words.js";

const histogramBins = 40;

export class Ledger {
  #book = document.getElementById("book");
  #rule = document.getElementById("rule");
  #verdict = document.getElementById("verdict");
  #range = document.getElementById("floor-range");
  #value = document.getElementById("floor-value");
  #histogram = document.getElementById("histogram");
  #do; #all = null; #levels = []; #unit = ""; #largest = 1; #low = 1e-6; #chosen = null;

  // actions: choose(point) when a row is chosen; slide(r) while the noise floor moves and floor(r) when it rests, in the
  // unit of tau; again() to read the pattern after that was cancelled.
  constructor(actions) {
    this.#do = actions;
    this.#range.addEventListener("input", () => {
      this.#slide(this.floor);
      actions.slide(this.floor);
    });
    this.#range.addEventListener("change", () => actions.floor(this.floor));
    document.getElementById("floor").addEventListener("submit", (e) => e.preventDefault());
  }

  // wait empties the book until the pattern is read.
  wait() {
    this.#all = null;
    this.#rule.textContent = "";
    this.#verdict.textContent = "";
    this.#showDoubts([]);
    this.#range.value = 0;
    this.#range.disabled = true;
    this.#histogram.replaceChildren();
    this.#book.replaceChildren(make("button", { type: "button", onclick: () => this.#do.again() }, "Read the pattern"));
  }

  // fresh takes the topology of a new run, without a floor, and the levels at which a rising floor cancels points.
  fresh(topology, levels, largest) {
    this.#range.disabled = false;
    this.#levels = levels;
    this.#all = topology;
    this.#unit = topology.run.tau_unit ?? "";
    this.#largest = largest || 1;
    const known = topology.points.map((p) => p.robustness).filter((r) => r > 0);
    this.#low = Math.max(1e-8 * this.#largest, Math.min(...known, 0.01 * this.#largest) / 2);
    this.#drawHistogram();
    this.show(topology);
  }

  // The slider is logarithmic from just below the weakest point to the largest |tau|; its left end is no floor.
  get floor() {
    const u = Number(this.#range.value) / 1000;
    return u === 0 ? 0 : this.#low * (this.#largest / this.#low) ** u;
  }

  setFloor(r) {
    const u = r > this.#low ? Math.log(r / this.#low) / Math.log(this.#largest / this.#low) : 0;
    this.#range.value = Math.round(1000 * Math.min(1, u));
    this.#showFloor(r);
  }

  #showFloor(r) {
    this.#value.textContent = r > 0 ? `${number(r, this.#unit)} (${number(100 * r / this.#largest)} % of the largest)` : "none";
    this.#range.setAttribute("aria-valuetext", this.#value.textContent);
  }

  #drawHistogram() {
    const bins = new Array(histogramBins).fill(0);
    const place = (r) => Math.log(r / this.#low) / Math.log(this.#largest / this.#low);
    for (const p of this.#all.points) {
      const u = p.robustness === null ? 1 : p.robustness > this.#low ? place(p.robustness) : 0;
      bins[Math.min(histogramBins - 1, Math.floor(u * histogramBins))]++;
    }
    const top = Math.max(1, ...bins);
    this.#histogram.setAttribute("viewBox", `0 0 ${histogramBins} 36`);
    this.#histogram.setAttribute("preserveAspectRatio", "none");
    this.#histogram.replaceChildren(...bins.map((n, i) => {
      const h = n === 0 ? 0 : 4 + (30 * n) / top;
      return draw("rect", { x: i + 0.1, y: 36 - h, width: 0.8, height: h, fill: "currentColor", opacity: 0.7 });
    }));
  }

  // slide shows at once what a floor will cancel: points leave in groups whose indices add up to nought.
  #slide(floor) {
    const gone = new Set(this.#levels.filter((l) => l.robustness < floor).flatMap((l) => l.points));
    const points = this.#all.points.filter((p) => !gone.has(p.id));
    this.show({ ...this.#all, points });
  }

  // show fills the book.
  show(topology) {
    const l = topology.ledger;
    this.#rule.textContent = `Why: ${l.rule}.`;
    const head = make("thead", {}, make("tr", {},
      ...["Point", "Robustness", "Sure"].map((t) => make("th", { scope: "col" }, t)),
      make("th", { scope: "col", class: "amount" }, "+1"), make("th", { scope: "col", class: "amount" }, "\u22121")));
    const body = make("tbody", {}, ...topology.points.map((p) => this.#row(p)));
    const plus = sum(topology.points, 1), minus = sum(topology.points, -1);
    const foot = make("tfoot", {}, make("tr", {}, make("th", { scope: "row", colspan: 3 }, "Sum of each column"),
      make("td", { class: "amount plus" }, number(plus)), make("td", { class: "amount minus" }, number(minus))),
    make("tr", {}, make("th", { scope: "row", colspan: 3 }, "The points add up to"), make("td", { class: "amount", colspan: 2 }, number(plus + minus))),
    make("tr", {}, make("th", { scope: "row", colspan: 3 }, "The surface demands"), make("td", { class: "amount", colspan: 2 }, number(l.expected))));
    this.#book.replaceChildren(make("div", { class: "rows" }, make("table", {}, head, body)), make("table", { class: "foot" }, foot));
    const text = l.balanced
      ? "The book balances: no point is missing and none is too many."
      : "The book does not balance: a point is missing, or one is too many.";
    this.#verdict.textContent = text;
    this.#verdict.classList.toggle("off", !l.balanced);
    this.#showDoubts(topology.findings ?? []);
    this.#showFloor(this.floor);
    this.choose(this.#chosen);
  }

  #showDoubts(findings) {
    const box = document.getElementById("doubts");
    box.hidden = findings.length === 0;
    box.firstElementChild.textContent = findings.length === 1 ? "One thing is in doubt" : `${findings.length} things are in doubt`;
    box.lastElementChild.replaceChildren(...findings.map((f) => make("li", {}, f.text)));
  }

  #row(p) {
    const share = p.robustness === null ? 1 : Math.max(0.02, Math.log10(1 + 1e4 * p.robustness / this.#largest) / 4);
    const amount = p.half ? p.index / 2 : p.index;
    const bar = make("span", { class: "bar" }, make("i"));
    bar.firstChild.style.width = `${100 * Math.min(1, share)}%`;
    const robust = p.robustness === null ? "uncancellable" : number(p.robustness, this.#unit);
    return make("tr", {
      tabindex: 0, "data-id": p.id, class: p.resolved === false ? "doubt" : "", title: p.note ?? "",
      "aria-label": `${p.id}, ${p.type} of ${p.sense}, robustness ${robust}`,
      onclick: () => this.#do.choose(p),
      onkeydown: (e) => { if (e.key === "Enter" || e.key === " ") { e.preventDefault(); this.#do.choose(p); } },
    },
    make("td", {}, make("b", { class: "id" }, p.id), ` ${p.half ? "half " : ""}${p.type}`, make("small", {}, p.sense)),
    make("td", {}, bar, make("small", {}, robust)),
    make("td", {}, `${Math.round(100 * p.confidence)}\u202f%`),
    make("td", { class: "amount plus" }, amount > 0 ? number(amount) : ""),
    make("td", { class: "amount minus" }, amount < 0 ? number(amount) : ""));
  }

  // choose marks the row of a point; null marks none.
  choose(id) {
    this.#chosen = id;
    for (const tr of this.#book.querySelectorAll("tbody tr")) {
      const on = tr.dataset.id === id;
      tr.setAttribute("aria-selected", on);
      if (on) tr.scrollIntoView({ block: "nearest" });
    }
  }
}

const sum = (points, sign) => points.reduce((s, p) => s + (p.index * sign > 0 ? (p.half ? p.index / 2 : p.index) : 0), 0);
