// Wires the page: worker, stage, instruments, address, and the calls for other people's scripts.

import { Engine } from "./engine.js";
import { Stage } from "./stage.js";
import { Ledger } from "./ledger.js";
import { Card } from "./card.js";
import { Sheets } from "./sheets.js";
import { Work } from "./work.js";
import { Key } from "./key.js";
import { Frames } from "./frames.js";
import { installCalls } from "./calls.js";
import { choosePresenter } from "./present.js";
import { make } from "./words.js";

const el = (id) => document.getElementById(id);
const engine = new Engine();
const work = new Work(engine);
const timings = { download: null, start: null, load: null, topology: null, first_picture: null };
let run = null; // what the worker said of the run that is open
let shown = null; // the topology in the ledger, without lines
let frames = null;

const clickReach = 10; // CSS pixels around a click within which a critical point is taken

engine.addEventListener("started", ({ detail }) => {
  timings.download = detail.download;
  timings.start = Math.max(0, detail.milliseconds - detail.download);
});
engine.addEventListener("died", ({ detail }) => work.complain(detail));
engine.addEventListener("failed", ({ detail }) => work.complain(detail.error));
engine.addEventListener("view", ({ detail }) => writeAddress(detail.link));

// --- opening runs

// openBytes opens a file's bytes; key is what links call the run. The run that is open stays if this fails.
async function openBytes(name, key, bytes, link) {
  const answer = await work.on(`Reading ${name}`, engine.ask("open", { name, run: key, link }, bytes));
  run = { ...answer, key };
  work.loaded = true;
  shown = null;
  timings.load = answer.milliseconds;
  el("run").textContent = `${run.name} \u00b7 ${run.triangles.toLocaleString("en")} triangles`;
  document.title = `${run.name} \u2013 Shearprint`;
  card.hide();
  ledger.wait();
  sheets.fresh(run, answer.view);
  await readPattern(0);
  const floor = answer.view.floor;
  ledger.setFloor(floor);
  if (floor > 0) await readPattern(floor);
  if (answer.view.at) await probe(answer.view.at, null);
  if (answer.warning) throw new Error(answer.warning);
}

// readPattern finds points and lines above a floor; the ledger of all of them knows what a rising floor will cancel.
async function readPattern(floor) {
  const read = run;
  const answer = await work.on("Finding critical points and lines", engine.ask("points", { robustness: floor }));
  if (run !== read) return; // another run was opened meanwhile
  shown = JSON.parse(answer.text);
  if (floor === 0) {
    timings.topology = answer.milliseconds;
    ledger.fresh(shown, answer.levels, run.largest_tau);
  } else ledger.show(shown);
}

const open = (opening) => work.during(opening);
const openFile = (file) => open(async () => openBytes(file.name, file.name, await file.arrayBuffer(), ""));

async function openFromAddress() {
  const dark = !location.hash && matchMedia("(prefers-color-scheme: dark)").matches;
  const link = dark ? "theme=dark" : location.hash.slice(1);
  const list = await (await fetch("runs.json")).json();
  const name = new URLSearchParams(link).get("run") || list.runs[0];
  offer(list.runs, name);
  const answer = await work.fetch(`runs/${encodeURIComponent(name)}`, `Loading ${name}`);
  if (!answer) throw new Error(`${name}: this page has no such run; drop the file here, or open the address without #`);
  await openBytes(name, name, answer, link);
}

// offer lists the runs that the page has, where there are several.
function offer(runs, chosen) {
  const list = el("runs");
  list.hidden = runs.length < 2;
  list.replaceChildren(...runs.map((name) => make("option", { selected: name === chosen }, name)));
}
el("runs").addEventListener("change", (e) => { location.hash = `run=${encodeURIComponent(e.target.value)}`; });

// --- instruments

const ledger = new Ledger({
  choose: (p) => work.quietly(async () => {
    engine.tell("fly", { at: p.position, normal: p.normal });
    await probe(p.position, p, true);
  }),
  slide: (floor) => engine.tell("set", { floor }),
  floor: (floor) => work.during(() => { engine.tell("set", { floor }); return readPattern(floor); }),
  again: () => work.during(() => readPattern(0)),
});

const card = new Card(() => { ledger.choose(null); engine.tell("set", { at: null }); el("stage").focus(); });

const sheets = new Sheets({
  look: (name) => engine.tell("look", { name }),
  set: (change) => engine.tell("set", change),
  resized: () => frames && tellSize(),
  health: async () => JSON.parse((await engine.ask("call", { name: "inspect", args: {} })).text),
});

// probe shows what is known at a place; point is the critical point there, if one was meant.
async function probe(at, point, tell = false) {
  if (tell) engine.tell("set", { at });
  const answer = JSON.parse((await engine.ask("call", { name: "probe", args: { at } })).text);
  const near = answer.nearest_point;
  const p = point ?? (near && near.distance <= 1e-6 * length(answer.position) ? shown?.points.find((q) => q.id === near.id) : null);
  const loupe = card.show(answer, p ?? null);
  ledger.choose(p ? p.id : null);
  loupe.draw(await engine.ask("loupe", { at: answer.position, normal: answer.normal, size: loupe.pixels }));
}

const length = (a) => Math.max(1e-30, Math.hypot(...a));

new Stage(el("stage"), {
  gesture: (g) => engine.tell("gesture", g),
  leave: () => card.hide(true),
  middle: () => {
    const r = run && !el("ledger").hidden && innerWidth > 760 ? el("ledger").getBoundingClientRect().right : 0;
    return [(r + innerWidth) / 2, (el("head").getBoundingClientRect().bottom + el("key").getBoundingClientRect().top) / 2];
  },
  whole: () => engine.tell("look", { name: "iso" }),
  click: (x, y) => run && work.quietly(async () => {
    el("stage").focus({ preventScroll: true });
    const hit = await engine.ask("pick", { x, y, reach: clickReach });
    if (!hit.at) return card.hide(true);
    return probe(hit.at, shown?.points.find((p) => p.id === hit.point), true);
  }),
});

// --- size, files, address

function tellSize() {
  const ratio = Math.min(Math.max(devicePixelRatio || 1, 0.25), 2);
  const wide = innerWidth > 760; // as in the style sheet: instruments beside the stage, not at its foot
  const covered = el("ledger").hidden ? null : el("ledger").getBoundingClientRect();
  engine.tell("size", {
    width: innerWidth, height: innerHeight, ratio, layers: frames.layers,
    left: wide && covered ? covered.right : 0, top: el("head").getBoundingClientRect().bottom, right: 0,
    bottom: covered && !wide ? innerHeight - covered.top : innerHeight - el("key").getBoundingClientRect().top,
  });
}

el("open").addEventListener("click", () => el("file").click());
el("file").addEventListener("change", (e) => { if (e.target.files[0]) openFile(e.target.files[0]); e.target.value = ""; });
addEventListener("dragover", (e) => { e.preventDefault(); document.body.classList.add("dropping"); });
addEventListener("dragleave", (e) => { if (!e.relatedTarget) document.body.classList.remove("dropping"); });
addEventListener("drop", (e) => {
  e.preventDefault();
  document.body.classList.remove("dropping");
  if (e.dataTransfer.files[0]) openFile(e.dataTransfer.files[0]);
});

let address = "";
function writeAddress(link) {
  address = link;
  history.replaceState(null, "", `#${link}`);
}

// follow takes a view into the controls of the page.
async function follow(view) {
  sheets.fresh(run, view);
  if ((shown?.min_robustness ?? 0) !== view.floor) await readPattern(view.floor);
  ledger.setFloor(view.floor);
  if (view.at) await probe(view.at, null);
  else card.hide();
}

addEventListener("hashchange", () => {
  const link = location.hash.slice(1);
  if (link === address) return;
  const wanted = new URLSearchParams(link).get("run");
  open(async () => {
    if (!run || (wanted && wanted !== run.key)) return openFromAddress();
    return follow((await engine.ask("link", { name: run.key, run: run.key, link })).view);
  });
});

installCalls({ engine, timings: () => ({ ...timings, ...frames?.timings }), follow: (view) => work.during(() => follow(view)) });

open(async () => {
  const presenter = await choosePresenter(el("picture"), new URLSearchParams(location.search).get("present"));
  document.documentElement.dataset.present = presenter.name;
  frames = new Frames(engine, presenter, timings, new Key());
  tellSize();
  addEventListener("resize", tellSize);
  await openFromAddress();
});
