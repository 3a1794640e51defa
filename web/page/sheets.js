// The sheets behind the buttons in the head: directions to look from, what is shown, and the health of the run.

import { make, number } from "./words.js";

const views = ["front", "rear", "left", "right", "top", "bottom", "iso"];

const layers = [
  { name: "colour", label: "Colour", choices: [["cp", "pressure coefficient"], ["p", "pressure"], ["tau", "wall shear stress"],
    ["basins", "basins: from which source, into which sink"], ["none", "none"]] },
  { name: "pattern", label: "Flow at the wall", choices: [["texture", "streamline texture"], ["lines", "single streamlines"], ["none", "none"]] },
  { name: "theme", label: "Theme", choices: [["light", "light"], ["dark", "dark"]] },
];
const switches = [
  ["motion", "Texture moves with the flow"], ["isobars", "Lines of equal value"], ["points", "Critical points"],
  ["separation", "Separation lines"], ["attachment", "Attachment lines"],
  ["closed", "Lines from saddle to node"], ["horn", "Lines into or out of a focus"], ["open", "Open lines"], ["cycle", "Closed orbits"],
  ["legend", "Key and scale"],
];

export class Sheets {
  #do; #health = document.getElementById("health"); #layers = document.getElementById("layers");

  constructor(actions) {
    this.#do = actions;
    document.getElementById("views").replaceChildren(...views.map((v) =>
      make("button", { type: "button", onclick: () => actions.look(v) }, v)));
    for (const name of ["views", "layers", "health", "ledger"]) this.#wire(name);
    if (innerWidth <= 760) this.#toggle("ledger", false);
  }

  #wire(name) {
    const button = document.getElementById(`${name}-button`), sheet = document.getElementById(name);
    button.addEventListener("click", () => this.#toggle(name, sheet.hidden));
    sheet.addEventListener("keydown", (e) => {
      if (e.key === "Escape") { this.#toggle(name, false); button.focus(); }
    });
  }

  #toggle(name, open) {
    for (const other of ["views", "layers", "health"]) if (other !== name && name !== "ledger") this.#set(other, false);
    this.#set(name, open);
    if (open && name === "health") this.#fillHealth();
  }

  #set(name, open) {
    document.getElementById(name).hidden = !open;
    document.getElementById(`${name}-button`).setAttribute("aria-expanded", open);
    if (name === "ledger") this.#do.resized();
  }

  // fresh sets the controls for a new run and its view.
  fresh(run, view) {
    document.documentElement.dataset.theme = view.theme;
    document.getElementById("key").hidden = !view.legend;
    this.#layers.replaceChildren(
      ...layers.map((l) => make("fieldset", {}, make("legend", {}, l.label), ...l.choices
        .filter(([v]) => l.name !== "colour" || v === "none" || v === "tau" || v === "basins" || run[`has_${v}`])
        .map(([v, text]) => make("label", {}, make("input", { type: "radio", name: l.name, value: v, checked: view[l.name] === v,
          onchange: () => this.#change(l.name, v) }), ` ${text}`)))),
      ...switches.map(([name, text]) => make("label", {}, make("input", { type: "checkbox", checked: view[name],
        onchange: (e) => this.#change(name, e.target.checked) }), ` ${text}`)));
    if (!this.#health.hidden) this.#fillHealth();
  }

  #change(name, value) {
    if (name === "theme") document.documentElement.dataset.theme = value;
    if (name === "legend") document.getElementById("key").hidden = !value;
    this.#do.set({ [name]: value });
  }

  async #fillHealth() {
    const h = await this.#do.health();
    const s = h.surface;
    const unit = h.run.length_unit ?? "";
    const facts = [
      `${s.vertices} vertices, ${s.triangles} triangles, ${s.parts.length} part${s.parts.length === 1 ? "" : "s"}`,
      `Euler characteristic ${s.euler_characteristic}, ${s.boundary_loops} rim${s.boundary_loops === 1 ? "" : "s"}, area ${number(s.area, unit && `${unit}\u00b2`)}`,
    ];
    const findings = (h.findings ?? []).map((f) => make("li", { class: f.level }, `${f.level}: ${f.text}${f.where ? ` (first: ${f.where})` : ""}`));
    this.#health.replaceChildren(make("h2", {}, "Health"), ...facts.map((t) => make("p", {}, t)),
      findings.length ? make("ul", {}, ...findings) : make("p", {}, "Nothing had to be repaired and nothing is in doubt."));
  }
}
