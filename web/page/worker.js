// The worker's shell: starts the compiled program, which sets self.shearprintReceive, and hands it messages.
importScripts("wasm_exec.js");

const version = 1; // of the protocol; see wasm/session
const waiting = [];
self.onmessage = ({ data }) => waiting.push(data);

const tell = (message) => self.postMessage([JSON.stringify({ version, id: 0, ...message }), null]);

// program fetches and compiles at once where the server names the right media type, else one after the other. A browser
// that lacks what the program needs says so here.
async function program(imports) {
  const answer = await fetch("worker.wasm");
  if (!answer.ok) throw new Error(`worker.wasm: the server answers ${answer.status}`);
  const began = performance.now();
  const bytes = await answer.arrayBuffer(); // works whatever media type the server gives
  tell({ event: "downloaded", body: { milliseconds: performance.now() - began } });
  return (await WebAssembly.instantiate(bytes, imports)).instance;
}

async function start() {
  const began = performance.now();
  const go = new Go();
  const instance = await program(go.importObject);
  const ready = new Promise((resolve) => { self.shearprintReady = resolve; });
  go.run(instance).then(() => tell({ event: "died", error: "the program in the worker has stopped; reload the page" }));
  await ready;
  tell({ event: "started", body: { milliseconds: performance.now() - began } });
  self.onmessage = ({ data }) => self.shearprintReceive(data[0], data[1]);
  for (const [text, block] of waiting) self.shearprintReceive(text, block);
}

start().catch((err) => tell({ event: "died", error: `the program in the worker cannot start: ${err.message}` }));
