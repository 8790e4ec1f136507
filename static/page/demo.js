// What a newcomer can break on the simulated rig, to see what the watch does.

import { make, put } from "./format.js";

const anything = "Within some blocks the band above names what is wrong, the event is entered below, and the channels concerned are marked.";

const panel = document.getElementById("try");

let faults = [];
let broken = []; // [code, target]
let open = false;
let may = false;
let send = () => {};
const what = make("select");
const where = make("select");
const breakIt = make("button", "strong", "Break it");
const expect = make("p", "expect");
const list = make("span", "broken");

// build makes the panel of a description, if it is of a simulated rig; ask sends a request.
export function build(description, ask) {
  send = ask;
  faults = description.faults;
  if (faults.length === 0) {
    return;
  }
  what.setAttribute("aria-label", "what breaks");
  where.setAttribute("aria-label", "where");
  what.replaceChildren(...faults.map(({ name }, i) => new Option(name, i)));
  what.onchange = choose;
  where.onchange = draw;
  breakIt.type = "button";
  breakIt.onclick = () => send({ type: "break", fault: fault().code, target: where.value });
  const act = make("p", "act");
  act.append(make("b", "", "Try the watch: break the simulated rig"), what, where, breakIt, list);
  panel.replaceChildren(act, expect);
  choose();
}

// control says whether this page may; link whether the program can be reached.
export function control(allowed) {
  may = allowed;
  panel.hidden = !may || faults.length === 0;
}

export function link(isOpen) {
  if (isOpen !== open) {
    open = isOpen;
    draw();
  }
}

// take keeps what is broken, which all pages share.
export function take(message) {
  broken = message.faults;
  list.replaceChildren(...broken.map(([code, target]) => {
    const button = make("button", "mend", `Mend ${nameOf(code)}${target === "" ? "" : ` at ${target}`}`);
    button.type = "button";
    button.onclick = () => send({ type: "mend", fault: code, target });
    return button;
  }));
  draw();
}

// nameOf is what a fault is called.
export function nameOf(code) {
  return faults.find((known) => known.code === code)?.name ?? code;
}

function fault() {
  return faults[Number(what.value)];
}

function choose() {
  const { targets } = fault();
  where.replaceChildren(...targets.map((target) => new Option(target, target)));
  where.hidden = targets.length === 0;
  draw();
}

function draw() {
  if (faults.length === 0) {
    return;
  }
  const is = broken.some(([code, target]) => code === fault().code && target === where.value);
  breakIt.disabled = !open || is;
  put(breakIt, is ? "Broken" : fault().once ? "Do it" : "Break it");
  for (const button of list.children) {
    button.disabled = !open;
  }
  put(expect, fault().expect || anything);
}
