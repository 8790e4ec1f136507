// The button that ends the run, and the one question that it asks.

import { put } from "./format.js";

const button = document.getElementById("finish");
const dialog = document.getElementById("ask");
const ended = document.getElementById("ended");

let open = false;
let finishing = false;
let over = false;
let words = {
  button: "Finish and save…",
  busy: "Finishing…",
  over: "Run ended",
};

// build sets what a confirmed finish does.
export function build(finish) {
  button.onclick = () => {
    dialog.returnValue = "stay";
    dialog.showModal();
  };
  dialog.onclose = () => {
    if (dialog.returnValue === "finish") {
      finish();
    }
  };
}

// savesNothing has it say that the results of this run will be lost, before they are.
export function savesNothing() {
  words = { button: "Finish, nothing saved…", busy: "Finishing…", over: "Run ended" };
  put(document.getElementById("ask-title"), "Finish the run? Its results will NOT be saved.");
  put(document.getElementById("ask-text"), "The program was started without --out DIR. Averaging ends here and cannot be taken up again.");
  put(document.getElementById("ask-finish"), "Finish, save nothing");
  draw();
}

// take shows a message on the run and returns whether it has ended.
export function take(message) {
  finishing = message.finishing;
  over = message.ended !== null;
  if (over) {
    put(ended, `${words.over}. ${message.ended}`);
    ended.hidden = false;
  }
  draw();
  return over;
}

// ofSetup has it speak of a setup check in place of a run.
export function ofSetup() {
  words = { button: "End the check…", busy: "Ending…", over: "Setup check ended" };
  put(document.getElementById("ask-title"), "End the setup check?");
  put(document.getElementById("ask-text"), "Stages that were not measured stay unknown. What was measured so far is kept.");
  put(document.getElementById("ask-running"), "Shakers that run go on running:");
  put(document.getElementById("ask-stay"), "Go on checking");
  put(document.getElementById("ask-finish"), "End the check");
  draw();
}

// control says whether this page may end the run.
export function control(may) {
  button.hidden = !may;
}

// link says whether the program can be reached.
export function link(isOpen) {
  open = isOpen;
  draw();
}

function draw() {
  put(button, over ? words.over : finishing ? words.busy : words.button);
  button.disabled = !open || finishing || over;
  if (button.disabled && dialog.open) {
    dialog.close("stay");
  }
}
