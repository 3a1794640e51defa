// Takes frames from the worker to the screen, one at a time, and measures them.

const remembered = 120; // frames in the medians

export class Frames {
  #engine; #presenter; #moving = []; #still = [];

  constructor(engine, presenter, timings, key) {
    this.#engine = engine;
    this.#presenter = presenter;
    engine.addEventListener("frame", async ({ detail }) => {
      const began = performance.now();
      await this.#presenter.show(detail);
      const now = performance.now();
      key.show(detail.key);
      timings.first_picture ??= now; // counted from the page's address
      const list = detail.still ? this.#still : this.#moving;
      list.push(detail.milliseconds + now - began);
      if (list.length > remembered) list.shift();
      this.#engine.tell("shown", {}, detail.block);
    });
  }

  get layers() { return this.#presenter.layers; }

  // timings holds the medians [milliseconds] of making and showing a frame.
  get timings() { return { frame_moving: median(this.#moving), frame_still: median(this.#still) }; }
}

function median(list) {
  if (list.length === 0) return null;
  const sorted = [...list].sort((a, b) => a - b);
  return sorted[Math.floor(sorted.length / 2)];
}
