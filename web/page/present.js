// Putting frames on the screen: through the program of the GPU where there is one, through a plain canvas elsewhere.

// choosePresenter looks at what the browser has; wanted is "gpu", "cpu" or null. A canvas through emulated WebGL2 is three
// times slower than a plain one, so that only real hardware counts. layers tells whether the presenter wants what a
// picture is mixed from rather than the picture.
export async function choosePresenter(canvas, wanted) {
  if (wanted === "gpu" || (wanted !== "cpu" && hardware())) {
    try {
      return await startView(canvas);
    } catch (err) {
      console.warn(`the GPU's presenter does not start, the plain canvas takes over: ${err.message}`);
    }
  }
  return new Plain(canvas);
}

// hardware tells whether WebGL2 runs on a GPU.
function hardware() {
  const gl = document.createElement("canvas").getContext("webgl2");
  if (!gl) return false;
  const info = gl.getExtension("WEBGL_debug_renderer_info");
  const name = String(gl.getParameter(info ? info.UNMASKED_RENDERER_WEBGL : gl.RENDERER));
  gl.getExtension("WEBGL_lose_context")?.loseContext();
  return !/swiftshader|llvmpipe|softpipe|software|basic render/i.test(name);
}

// Plain puts finished pixels on a 2-D canvas.
class Plain {
  name = "cpu";
  layers = false;
  #canvas; #context;
  constructor(canvas) {
    this.#canvas = canvas;
    this.#context = canvas.getContext("2d", { alpha: false });
  }
  async show({ block, width, height }) {
    if (this.#canvas.width !== width || this.#canvas.height !== height) {
      this.#canvas.width = width;
      this.#canvas.height = height;
    }
    this.#context.putImageData(new ImageData(new Uint8ClampedArray(block), width, height), 0, 0);
  }
}

// startView starts the program that mixes frames on the GPU. Its loop asks for animation frames without end; they are held
// back while there is nothing new to show, so that a still page costs nothing.
async function startView(canvas) {
  const next = window.requestAnimationFrame.bind(window);
  let due = 0, held = null;
  window.requestAnimationFrame = (callback) => {
    if (due > 0) {
      due--;
      return next(callback);
    }
    held = callback;
    return 0;
  };
  const release = (frames) => {
    due = frames;
    const callback = held;
    held = null;
    if (callback) window.requestAnimationFrame(callback);
  };
  release(Infinity);
  await script("wasm_exec.js");
  const go = new window.Go();
  stretchTimers(go.importObject.gojs, () => due === 0);
  const answer = await fetch("view.wasm");
  if (!answer.ok) throw new Error(`view.wasm: the server answers ${answer.status}`);
  const { instance } = await WebAssembly.instantiate(await answer.arrayBuffer(), go.importObject);
  const ready = new Promise((resolve, reject) => {
    window.shearprintViewReady = resolve;
    setTimeout(() => reject(new Error("no answer after 20 s")), 20000);
  });
  const over = go.run(instance).then(() => { throw new Error("the program has stopped"); });
  await Promise.race([ready, over]);
  canvas.hidden = true;
  const own = [...document.querySelectorAll("body > canvas")].at(-1);
  own.id = "view";
  own.tabIndex = -1;
  own.setAttribute("aria-hidden", "true");
  addEventListener("resize", () => release(Math.max(due, framesToShow)));
  return {
    name: "gpu",
    layers: true,
    show: ({ block, animated }) => {
      const problem = window.shearprintPresent(new Uint8Array(block));
      if (problem) throw new Error(problem);
      const shown = new Promise((resolve) => { window.shearprintShown = resolve; });
      release(animated ? Infinity : framesToShow);
      return shown;
    },
  };
}

// stretchTimers makes the program's timers rare while idle() holds: Ebitengine looks ten times a second whether its sound
// should pause, and there is none.
function stretchTimers(imports, idle) {
  const name = "runtime.scheduleTimeoutEvent", schedule = imports[name], rare = 5000; // milliseconds
  imports[name] = (sp) => {
    const set = window.setTimeout;
    window.setTimeout = (f, ms) => set(f, idle() ? Math.max(ms, rare) : ms);
    try {
      schedule(sp);
    } finally {
      window.setTimeout = set;
    }
  };
}

// framesToShow is the number of animation frames in which the view's loop takes up a picture and has it on the screen.
const framesToShow = 3;

function script(src) {
  return new Promise((resolve, reject) => {
    const s = document.createElement("script");
    s.src = src;
    s.onload = resolve;
    s.onerror = () => reject(new Error(`${src} cannot be loaded`));
    document.head.append(s);
  });
}
