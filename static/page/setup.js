// The panel of the setup check: its stages, what a person is to do now, the button that says that it is done,
// and how it ended.

import { make, put } from "./format.js";

const readMs = 1000; // a new instruction stands this long before the button works: a double click must not answer it

const stageStates = { done: "✓ done", now: "▶ now", next: "○ next", "left-out": "✕ not measured" };

// what is said at the end, by the worst finding.
const ends = {
  stop: ["STOP", "stop-and-look", "Mend what is marked STOP, then check again. A run would be worthless as it is."],
  look: ["LOOK", "look", "Look at what is marked LOOK before the run."],
  unknown: ["UNKNOWN", "unknown", "Nothing was found wrong, but not everything could be judged."],
  fine: ["IN ORDER", "enough", "Nothing was found that speaks against the run."],
};

const atTheEnd = "The shakers may still be running: this program switches nothing off. Turn the drive down where it is made, and keep clear.";

const task = document.getElementById("task");
const word = document.getElementById("setup-word");
const shape = document.getElementById("setup-shape");
const stages = document.getElementById("stages");
const act = document.getElementById("setup-act");
const what = document.getElementById("setup-do");
const more = document.getElementById("setup-more");
const beware = document.getElementById("setup-beware");
const part = document.getElementById("setup-part");
const partOf = document.getElementById("setup-of");
const bar = document.getElementById("setup-bar");
const button = document.getElementById("measure");
const [buttonWord, buttonStage] = button.children;

let state = null; // the newest message; null without a setup check
let fresh = false; // the program can be reached and what is shown is not old
let old = false;
let ending = false;
let may = true; // start a stage
let asked = false; // the button was pressed and the program has not answered yet
let told = null; // the stage whose instruction stands
let toldAt = 0;

// build sets what the button does: measure(stage).
export function build(measure) {
  button.onkeydown = (event) => {
    if (event.repeat) {
      event.preventDefault(); // a key that is held down says it once
    }
  };
  button.onclick = () => {
    if (canMeasure()) {
      asked = true;
      measure(state.stage);
      draw();
    }
  };
}

// take shows a message on the setup check.
export function take(message) {
  state = message;
  asked = false;
  const telling = state.waiting ? state.stage : null;
  if (telling !== told) {
    told = telling;
    toldAt = performance.now();
    setTimeout(draw, readMs + 10);
  }
  draw();
}

// finishing says that the check was asked to end.
export function finishing(is) {
  ending = is;
  draw();
}

// control says whether this page may start a stage.
export function control(allowed) {
  may = allowed;
  draw();
}

// link says whether the program can be reached, and whether what is shown is old.
export function link(isOpen, isOld) {
  old = isOld;
  fresh = isOpen && !isOld;
  draw();
}

// title is the state for the browser's tab, undefined without a setup check.
export function title() {
  return state === null ? undefined : old ? word.textContent : `Setup: ${word.textContent.toLowerCase()}`;
}

function canMeasure() {
  return may && state !== null && state.waiting && !state.ended && fresh && !ending && !asked && performance.now() - toldAt >= readMs;
}

function draw() {
  if (state === null) {
    return;
  }
  drawStages();
  act.hidden = state.ended;
  const caution = state.ended ? atTheEnd : state.beware;
  beware.hidden = caution === "";
  put(beware.lastElementChild, caution);
  if (state.ended) {
    drawEnd();
  } else {
    drawTask();
  }
  if (old) { // a word that may no longer be true must not stand there in large letters
    show("old", "OLD DATA", "old");
  }
}

function drawStages() {
  if (stages.children.length !== state.stages.length) {
    stages.replaceChildren(...state.stages.map((_, i) => {
      const element = make("li");
      element.append(make("b", "nr", String(i + 1)), make("span", "name"), make("b", "state"));
      return element;
    }));
  }
  state.stages.forEach((stage, i) => {
    const element = stages.children[i];
    const [, name, now] = element.children;
    if (element.dataset.state !== stage.state) {
      element.dataset.state = stage.state;
      element.ariaCurrent = stage.state === "now" ? "step" : null;
    }
    put(name, capital(stage.name));
    put(now, stageStates[stage.state]);
  });
}

function drawTask() {
  const index = state.stages.findIndex(({ code }) => code === state.stage);
  const { name } = state.stages[index];
  show(state.waiting ? "person" : "measuring", state.waiting ? "YOUR TURN" : "MEASURING", state.waiting ? "person" : "measuring");
  put(what, state.waiting ? state.do : "Leave the rig as it is until this stage is measured.");
  put(more, "");
  const percent = state.part === null ? null : Math.round(100 * Math.min(Math.max(state.part, 0), 1));
  put(part, state.waiting ? `Stage ${index + 1}` : percent === null ? "unknown" : `${percent} %`);
  put(partOf, state.waiting ? `of ${state.stages.length}` : `of stage ${index + 1} measured`);
  bar.dataset.known = String(percent !== null);
  bar.setAttribute("aria-valuenow", String(percent ?? 0));
  bar.firstElementChild.style.transform = `scaleX(${(percent ?? 0) / 100})`;
  bar.hidden = state.waiting;
  // It stays where it is and keeps the focus, so that the next stage can be started by key too.
  button.setAttribute("aria-disabled", String(!canMeasure()));
  put(buttonWord, ending ? "Ending…" : !state.waiting ? "Measuring…" : asked ? "Starting…" : "The rig is so: measure");
  put(buttonStage, name);
}

function drawEnd() {
  const left = state.stages.filter((stage) => stage.state === "left-out").map(({ name }) => name);
  // Nothing is in order as a whole while stages are missing.
  const worst = left.length > 0 && state.worst === "fine" ? "unknown" : state.worst;
  const [mark, picture, advice] = ends[worst] ?? ["ENDED", "ended", ""];
  show(worst, mark, picture);
  put(what, `${capital(state.summary)}.`);
  put(more, [left.length > 0 ? `Not measured: ${left.join("; ")}.` : "", advice].join(" "));
}

function show(name, text, picture) {
  task.dataset.state = name;
  put(word, text);
  shape.setAttribute("href", `#shape-${picture}`);
}

function capital(text) {
  return text.charAt(0).toUpperCase() + text.slice(1);
}
