// All plots of the page: which of them the program has to send, when they are drawn, and what holds for all.

import * as choices from "./choices.js";
import { bandsOf } from "./flags.js";
import { Heatmap } from "./heatmap.js";
import { Kept } from "./kept.js";
import { watch } from "./palette.js";
import { Panel } from "./panel.js";
import { fit } from "./room.js";
import { say } from "./say.js";
import { Still } from "./still.js";

const leastMs = 240; // between two drawings: faster than that nobody reads, and the plots take their time
const settleMs = 120; // scrolling past a plot is no reason to ask for it

let panels = [];
let newest = null;
let held = null; // the message at which the plots stand still
let wanting = null; // what is done with the next message that has all plots
let drawnAt = -Infinity;
let timer = 0;
let asking = 0;
const due = new Map(); // panels that are to be drawn, and what

// page is what all panels share.
const page = {
  spacingHz: 1,
  judgedHz: 0, // below, nothing is judged
  lastHz: 0,
  responses: [], // names
  sizes: false, // else dB
  band: null, // shown in place of the view's, while the plots stand still
  standing: [], // events
  kept: new Kept(() => panels.forEach((panel) => panel.recolour())),
  look: choices.look,
  go: (part) => choices.choose(part),
  keep: (panel) => panel.message !== null && keepTraces([panel], panel.message),
  seen: () => ask(),
  resized: () => ask(),
};

const still = new Still(run);

// build makes the plots of a description.
export function build(description) {
  page.spacingHz = description.spacing_hz;
  page.lastHz = (description.lines - 1) * description.spacing_hz;
  page.judgedHz = description.target.first_hz;
  page.responses = description.channels.slice(description.forces).map(({ name }) => name);
  panels = description.plots.map((plot) => plot.id === "map" ? new Heatmap(plot, page) : new Panel(plot, page));
  const plots = document.getElementById("plots");
  plots.replaceChildren(...panels.map((panel) => panel.element));
  plots.before(page.kept.element, still.element);
  fit(plots);
  panels.forEach((panel) => panel.open());
  choices.tools({ still: toggleStill, keep: keepAll, sizes: showSizes });
  choices.onBand(narrow);
  choices.onRefused((what) => still.refuse(what, newest));
  watch(() => panels.forEach((panel) => panel.recolour()));
  document.addEventListener("visibilitychange", ask);
}

// keys are the letters that plots answer to: [key, what it does, function].
export const keys = [
  ["T", "stops the plots, or lets them run again", toggleStill],
  ["K", "keeps the traces of all plots, to compare with", keepAll],
  ["L", "frequency: linear, or equal ratios equally far apart", choices.toggleLog],
  ["D", "sizes: dB, or linear", () => choices.toggleSizes()],
  ["B", "shows the whole band", () => choices.look(null, null)],
];

// take keeps the newest refresh and draws it soon; one with another view at once.
export function take(message) {
  const chosen = newest === null || JSON.stringify(newest.view) !== JSON.stringify(message.view);
  newest = message;
  if (wanting !== null && isWhole(message)) {
    const act = wanting;
    wanting = null;
    act(message);
    ask();
  }
  if (held !== null) {
    still.follow(message);
    return;
  }
  const wait = chosen ? 0 : Math.max(0, drawnAt + leastMs - performance.now());
  clearTimeout(timer);
  timer = setTimeout(draw, wait);
}

// flag takes the events that stand; those with bands are shown.
export function flag(standing) {
  const changed = JSON.stringify(bandsOf(standing)) !== JSON.stringify(bandsOf(page.standing));
  page.standing = standing;
  if (changed) {
    panels.forEach((panel) => panel.place());
  }
}

// draw draws one panel a frame, so that the page answers in between.
function draw() {
  drawnAt = performance.now();
  const idle = due.size === 0;
  for (const panel of panels.filter(({ plot }) => newest.view.parts.includes(plot.id))) {
    due.set(panel, newest);
  }
  if (idle) {
    drawNext();
  }
}

function drawNext() {
  for (const [panel, message] of due) {
    due.delete(panel);
    panel.take(message);
    if (due.size > 0) {
      requestAnimationFrame(drawNext);
    }
    return;
  }
}

// ask tells the program which plots are in view and how many points they can show.
function ask() {
  clearTimeout(asking);
  asking = setTimeout(() => {
    const asked = document.hidden && wanting === null ? [] : possible().filter(({ inView }) => inView || wanting !== null);
    const widest = Math.max(0, ...asked.map(({ canvas }) => canvas.clientWidth));
    choices.want(asked.map(({ plot }) => plot.id), Math.ceil(widest * devicePixelRatio));
  }, settleMs);
}

// possible are the plots that this rig can have.
function possible() {
  return panels.filter(({ plot }) => plot.needs === "");
}

// whole does something with a message that has all plots: the newest, or the next one.
function whole(act) {
  if (newest !== null && isWhole(newest)) {
    act(newest);
  } else {
    wanting = act;
    ask();
  }
}

function isWhole({ view }) {
  return possible().every(({ plot }) => view.parts.includes(plot.id));
}

// keepTraces keeps what some panels show of a message.
function keepTraces(some, message) {
  const traces = Object.fromEntries(some.filter((panel) => panel.traces !== undefined)
    .map((panel) => [panel.plot.id, panel.traces(message)]).filter(([, list]) => list.length > 0));
  const letter = Object.keys(traces).length === 0 ? null : page.kept.keep(traces, message);
  say(letter !== null ? `Kept as ${letter}.` : page.kept.full() ? "Three are kept already: drop one first." : "There is nothing to keep yet.");
}

function keepAll() {
  if (held !== null) {
    keepTraces(possible(), held);
  } else {
    whole((message) => keepTraces(possible(), message));
  }
}

function toggleStill() {
  if (held !== null) {
    run();
  } else {
    whole(stop);
  }
}

// stop has all plots stand still at one message.
function stop(message) {
  held = message;
  clearTimeout(timer);
  due.clear();
  still.begin(message);
  choices.hold(true);
  panels.forEach((panel) => {
    panel.standStill(true);
    panel.take(message);
  });
}

function run() {
  held = null;
  page.band = null;
  still.end();
  choices.hold(false);
  panels.forEach((panel) => panel.standStill(false));
  draw();
}

// narrow shows a band of what stands still; otherwise the program sends it anew, with all its lines.
function narrow(fromHz, toHz) {
  if (held !== null) {
    const [low, high] = [held.view.first, held.view.last].map((line) => line * page.spacingHz);
    const band = [Math.max(fromHz ?? low, low), Math.min(toHz ?? high, high)];
    page.band = band[1] > band[0] ? band : null;
    panels.forEach((panel) => panel.redraw());
  }
}

function showSizes(is) {
  page.sizes = is;
  panels.forEach((panel) => panel.scale());
}
