// Gestures on the stage: pointer, wheel, touch and keys become small messages for the worker, which owns the camera.

const clickSlop = 5; // pixels that a finger or mouse may move and still click
const keyTurn = 40; // pixels of dragging that an arrow key stands for

export class Stage {
  #el; #do; #pointers = new Map(); #moved = 0; #spread = 0;

  // actions: gesture({kind, ...}), click(x, y) with a place in CSS pixels, whole() to show the whole run again,
  // leave() to put the chosen place away.
  constructor(el, actions) {
    this.#el = el;
    this.#do = actions;
    el.addEventListener("pointerdown", (e) => this.#down(e));
    el.addEventListener("pointermove", (e) => this.#move(e));
    el.addEventListener("pointerup", (e) => this.#up(e, true));
    el.addEventListener("pointercancel", (e) => this.#up(e, false));
    el.addEventListener("wheel", (e) => this.#wheel(e), { passive: false });
    el.addEventListener("keydown", (e) => this.#key(e));
    el.addEventListener("contextmenu", (e) => e.preventDefault());
  }

  #tell(kind, details) { this.#do.gesture({ kind, ...details }); }

  #down(e) {
    this.#el.setPointerCapture(e.pointerId);
    this.#pointers.set(e.pointerId, { x: e.clientX, y: e.clientY });
    if (this.#pointers.size === 1) this.#moved = 0;
    this.#spread = 0;
    this.#el.classList.add("dragging");
  }

  #move(e) {
    const p = this.#pointers.get(e.pointerId);
    if (!p) return;
    const dx = e.clientX - p.x, dy = e.clientY - p.y;
    p.x = e.clientX; p.y = e.clientY;
    this.#moved += Math.hypot(dx, dy);
    if (this.#pointers.size === 2) return this.#pinch(dx, dy);
    if (this.#pointers.size > 2 || this.#moved < clickSlop) return;
    const pan = e.shiftKey || e.ctrlKey || (e.buttons & 6) !== 0;
    this.#tell(pan ? "pan" : "orbit", { dx, dy });
  }

  #pinch(dx, dy) {
    const [a, b] = [...this.#pointers.values()];
    const spread = Math.hypot(a.x - b.x, a.y - b.y);
    this.#tell("pan", { dx: dx / 2, dy: dy / 2 });
    if (this.#spread > 0 && spread > 0) {
      this.#tell("zoom", { factor: spread / this.#spread, x: (a.x + b.x) / 2, y: (a.y + b.y) / 2 });
    }
    this.#spread = spread;
  }

  #up(e, real) {
    const had = this.#pointers.delete(e.pointerId);
    if (this.#pointers.size === 0) this.#el.classList.remove("dragging");
    if (had && real && this.#pointers.size === 0 && this.#moved < clickSlop && e.button === 0) this.#do.click(e.clientX, e.clientY);
    if (this.#pointers.size > 0) this.#moved = Infinity; // the other finger's lift is no click
    this.#spread = 0;
  }

  #wheel(e) {
    e.preventDefault();
    const unit = e.deltaMode === 1 ? 16 : e.deltaMode === 2 ? 400 : 1;
    this.#tell("zoom", { factor: Math.exp(Math.max(-1, Math.min(1, -e.deltaY * unit * 0.0015))), x: e.clientX, y: e.clientY });
  }

  #key(e) {
    if (e.ctrlKey || e.metaKey || e.altKey || e.target !== this.#el) return;
    const x = innerWidth / 2, y = innerHeight / 2;
    const arrows = { ArrowLeft: [-keyTurn, 0], ArrowRight: [keyTurn, 0], ArrowUp: [0, -keyTurn], ArrowDown: [0, keyTurn] };
    if (arrows[e.key]) {
      const [dx, dy] = arrows[e.key];
      this.#tell(e.shiftKey ? "pan" : "orbit", { dx, dy });
    } else if (e.key === "+" || e.key === "=") this.#tell("zoom", { factor: 1.2, x, y });
    else if (e.key === "-" || e.key === "_") this.#tell("zoom", { factor: 1 / 1.2, x, y });
    else if (e.key === "Home") this.#do.whole();
    else if (e.key === "Escape") this.#do.leave();
    else if (e.key === "Enter") this.#do.click(...this.#do.middle());
    else return;
    e.preventDefault();
  }
}
