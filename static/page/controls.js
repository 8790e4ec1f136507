// What people can have the run do, and what any of them did.

import { put } from "./format.js";
import { say } from "./say.js";

const toldMs = 8000; // long enough to read a sentence twice
const patienceMs = 4000; // by then a run has answered, or says itself what it is busy with

const pause = document.getElementById("pause");
const over = document.getElementById("start-over");
const note = document.getElementById("note");
const overBox = document.getElementById("over");
const noteBox = document.getElementById("note-box");
const noteText = document.getElementById("note-text");
const noteLeft = document.getElementById("note-left");
const told = document.getElementById("told");

const did = {
  "pause": "Pause was asked for", "resume": "Resume was asked for", "start-over": "The average is to start over",
  "note": "A note was added", "break": "Broken on the simulated rig", "mend": "Mended on the simulated rig",
};

let send = () => {};
let fixed = false;
let may = false;
let open = false; // the program can be reached
let closed = false; // the run has ended or is finishing
let isPaused = false;
let asked = 0; // when pause or resume was asked for here, 0 when it was answered
let timer = 0;

// build takes a description and what sends a request.
export function build(description, ask) {
  send = ask;
  fixed = description.fixed;
  pause.onclick = () => {
    asked = performance.now();
    send({ type: isPaused ? "resume" : "pause" });
    draw();
  };
  over.onclick = () => overBox.showModal();
  overBox.onclose = () => {
    if (overBox.returnValue === "over") {
      send({ type: "start-over" });
    }
    overBox.returnValue = "stay";
  };
  note.onclick = () => {
    noteBox.returnValue = "stay";
    noteBox.showModal();
    noteText.focus();
    count();
  };
  noteText.oninput = count;
  document.getElementById("note-stay").onclick = () => noteBox.close("stay");
  noteBox.onclose = () => {
    // What cannot be seen, such as a line break that was pasted, becomes a blank.
    const text = noteText.value.replaceAll(/[\p{C}\p{Zl}\p{Zp}]/gu, " ").trim();
    if (noteBox.returnValue === "add" && text !== "") {
      send({ type: "note", text });
      noteText.value = "";
    }
  };
}

function count() {
  put(noteLeft, `${noteText.maxLength - noteText.value.length} characters left. Enter adds it, Escape leaves it; what was typed stays here.`);
}

// control says whether this page may have the run do anything.
export function control(allowed) {
  may = allowed;
  draw();
}

// link says whether the program can be reached.
export function link(isOpen) {
  open = isOpen;
  draw();
}

// end says that the run takes no more commands.
export function end() {
  closed = true;
  draw();
}

// paused says whether the average is paused.
export function paused(is) {
  if (is !== isPaused) {
    isPaused = is;
    asked = 0;
    draw();
  }
}

// show takes what some page had the run do; name says what a fault is called.
export function show(message, name) {
  const at = new Date(message.at_ms).toLocaleTimeString([], { hour12: false });
  const what = message.fault === "" ? "" : `: ${name(message.fault)}${message.target === "" ? "" : ` at ${message.target}`}`;
  tell(`${at} · ${did[message.kind] ?? message.kind}${what}.`);
}

// refused says why something was not done.
export function refused(message) {
  asked = 0;
  tell(`NOT DONE: ${message.text}`);
  draw();
}

function tell(text) {
  put(told, text);
  told.hidden = false;
  say(text);
  clearTimeout(timer);
  timer = setTimeout(() => {
    told.hidden = true;
  }, toldMs);
}

function draw() {
  const waits = asked > 0 && performance.now() - asked < patienceMs;
  pause.hidden = over.hidden = !may || fixed;
  note.hidden = !may;
  put(pause, isPaused ? (waits ? "Resuming…" : "Resume averaging") : waits ? "Pausing…" : "Pause averaging");
  pause.classList.toggle("strong", isPaused);
  pause.disabled = !open || closed || waits;
  over.disabled = note.disabled = !open || closed;
  for (const box of [overBox, noteBox]) {
    if (box.open && over.disabled) {
      box.close("stay");
    }
  }
}
