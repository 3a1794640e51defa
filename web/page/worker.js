// The worker's shell: starts the compiled program, which sets self.shearprintReceive, and hands it messages.
importScripts("wasm_exec.js");

const version = 1; // of the protocol; see wasm/session
const waiting = [];
self.onmessage = ({ data }) => waiting.push(data);

const tell = (message) => self.postMessage([JSON.stringify({ version, id: 0, ...message }), null]);

// program compiles while it downloads. Where the server names another media type than browsers insist on, that fails, and
// the bytes are taken as they are.
async function program(imports) {
  const address = new URL("worker.wasm", self.location).href;
  const answer = await fetch(address);
  if (!answer.ok) throw new Error(`worker.wasm: the server answers ${answer.status}`);
  const spare = answer.clone();
  try {
    return (await WebAssembly.instantiateStreaming(answer, imports)).instance;
  } catch {
    return (await WebAssembly.instantiate(await spare.arrayBuffer(), imports)).instance;
  }
}

async function start() {
  const began = performance.now();
  const go = new Go();
  const instance = await program(go.importObject);
  const ready = new Promise((resolve) => { self.shearprintReady = resolve; });
  go.run(instance).then(() => tell({ event: "died", error: "the program in the worker has stopped; reload the page" }));
  await ready;
  const load = performance.getEntriesByType("resource").find((e) => e.name.endsWith("worker.wasm"));
  tell({ event: "started", body: { milliseconds: performance.now() - began, download: load?.duration ?? 0 } });
  self.onmessage = ({ data }) => self.shearprintReceive(data[0], data[1]);
  for (const [text, block] of waiting) self.shearprintReceive(text, block);
}

start().catch((err) => tell({ event: "died", error: `the program in the worker cannot start: ${err.message}` }));
