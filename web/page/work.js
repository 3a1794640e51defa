// What is being worked on, and what went wrong: progress with a cancel button, the state of the page, and the alert.

const root = document.documentElement;
const cancelled = "cancelled"; // what the worker says of a request that was cancelled
const el = (id) => document.getElementById(id);

export class Work {
  #engine; #busy = 0; #turn = 0; #abort = null;
  loaded = false; // whether a run is open

  constructor(engine) {
    this.#engine = engine;
    engine.addEventListener("progress", ({ detail }) => this.#progress(detail.stage, detail.share));
    el("cancel").addEventListener("click", () => {
      this.#abort?.abort();
      engine.tell("cancel", { id: 0 });
    });
    el("dismiss").addEventListener("click", () => this.clear());
  }

  // on shows progress while a promise is open.
  async on(stage, promise) {
    this.#busy++;
    this.#progress(stage, -1);
    el("progress").hidden = false;
    try {
      return await promise;
    } finally {
      if (--this.#busy === 0) el("progress").hidden = true;
    }
  }

  #progress(stage, share) {
    el("stage-name").textContent = stage;
    if (share >= 0) el("share").value = share;
    else el("share").removeAttribute("value");
  }

  // fetch loads bytes with progress; null where the server has none. Cancelling it throws.
  async fetch(url, stage) {
    this.#abort = new AbortController();
    try {
      return await this.on(stage, this.#fetch(url, stage, this.#abort.signal));
    } finally {
      this.#abort = null;
    }
  }

  async #fetch(url, stage, signal) {
    const answer = await fetch(url, { signal });
    if (!answer.ok) return null;
    const total = answer.headers.has("Content-Encoding") ? 0 : Number(answer.headers.get("Content-Length"));
    const parts = [];
    let have = 0;
    for (const reader = answer.body.getReader(); ;) {
      const { done, value } = await reader.read();
      if (done) break;
      parts.push(value);
      have += value.length;
      if (total > 0) this.#progress(stage, have / total);
    }
    return new Blob(parts).arrayBuffer();
  }

  // during runs what changes the run or its reading: the page is "working", then "ready", or "error". A task that begins
  // later has the say.
  async during(task) {
    this.clear();
    const turn = ++this.#turn;
    root.dataset.state = this.loaded ? "working" : "loading";
    let problem = "";
    try {
      await task();
    } catch (err) {
      problem = err.name === "AbortError" ? cancelled : err.message;
    }
    if (turn !== this.#turn) return;
    if (problem && !(problem === cancelled && this.loaded)) this.complain(problem);
    else root.dataset.state = "ready";
  }

  // quietly runs what leaves the state alone unless it fails.
  async quietly(task) {
    try {
      await task();
    } catch (err) {
      this.complain(err.message);
    }
  }

  complain(text) {
    el("alert-text").textContent = text; // may begin with a file's name
    el("alert-box").hidden = false;
    root.dataset.state = "error";
  }

  clear() {
    el("alert-text").textContent = "";
    el("alert-box").hidden = true;
    if (root.dataset.state === "error") root.dataset.state = "ready";
  }
}
