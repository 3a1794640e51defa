// The page's end of the talk with the worker: requests with numbers, answers as promises, events to listeners. A message
// is a line of JSON, with the protocol's version first, and a block of bytes beside it or null.

const version = 1; // see wasm/session

export class Engine extends EventTarget {
  #worker = new Worker("worker.js");
  #next = 1;
  #open = new Map();

  constructor() {
    super();
    this.#worker.onmessage = ({ data }) => this.#receive(JSON.parse(data[0]), data[1]);
    this.#worker.onerror = (e) => this.#fail(e.message || "the worker cannot be loaded");
  }

  // ask sends a request and promises its answer: its body, with the bytes that came beside it as block. The promise has
  // the request's number as id, for cancel.
  ask(what, args = {}, block = null) {
    const id = this.#next++;
    const answer = new Promise((resolve, reject) => {
      this.#open.set(id, { resolve, reject });
      this.#send(id, what, args, block);
    });
    answer.id = id;
    return answer;
  }

  // tell sends a message that has no answer.
  tell(what, args = {}, block = null) { this.#send(0, what, args, block); }

  #send(id, what, args, block) {
    this.#worker.postMessage([JSON.stringify({ version, id, what, args }), block], block ? [block] : []);
  }

  #receive(m, block) {
    if (m.version !== version) return this.#fail("page and worker are of different versions; reload the page");
    if (m.event === "died") return this.#fail(m.error);
    if (m.event) return this.dispatchEvent(new CustomEvent(m.event, { detail: { ...m.body, error: m.error, block } }));
    const job = this.#open.get(m.id);
    if (!job) return m.error ? this.dispatchEvent(new CustomEvent("failed", { detail: { error: m.error } })) : undefined;
    this.#open.delete(m.id);
    if (m.error) job.reject(new Error(m.error));
    else job.resolve({ ...m.body, block });
  }

  #fail(text) {
    for (const job of this.#open.values()) job.reject(new Error(text));
    this.#open.clear();
    this.dispatchEvent(new CustomEvent("died", { detail: text }));
  }
}
