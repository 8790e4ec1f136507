// The button that ends the run, and the one question that it asks.

import { put } from "./format.js";

const button = document.getElementById("finish");
const dialog = document.getElementById("ask");
const ended = document.getElementById("ended");

let open = false;
let finishing = false;
let over = false;

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

// take shows a message on the run and returns whether it has ended.
export function take(message) {
  finishing = message.finishing;
  over = message.ended !== null;
  if (over) {
    put(ended, `Run ended. ${message.ended}`);
    ended.hidden = false;
  }
  draw();
  return over;
}

// link says whether the program can be reached.
export function link(isOpen) {
  open = isOpen;
  draw();
}

function draw() {
  put(button, over ? "Run ended" : finishing ? "Finishing…" : "Finish and save…");
  button.disabled = !open || finishing || over;
  if (button.disabled && dialog.open) {
    dialog.close("stay");
  }
}
