// The list of events, newest first, with what people did among them.

import { item } from "./event.js";
import { put } from "./format.js";
import { ofPeople } from "./kinds.js";

const mostShown = 200; // the file of events has them all

const list = document.getElementById("events");
const count = document.getElementById("event-count");
const seenAll = document.getElementById("seen-all");

let newest = 0;
let kept = []; // { event, element }, newest first
let seen = new Set(); // numbers that were acknowledged
let may = false;
let doing = { showBand: () => {}, acknowledge: () => {} };
let changed = () => {};

// build sets what an event's buttons do, showBand(fromHz, toHz) and acknowledge(number, before), and who is told
// of a change.
export function build(does, tell) {
  doing = does;
  changed = tell;
  seenAll.onclick = () => doing.acknowledge(newest, true);
}

// control says whether this page may acknowledge.
export function control(allowed) {
  may = allowed;
  drawSeen();
}

// last is the number of the newest event that is here.
export function last() {
  return newest;
}

// newestEvent is the newest event, or null.
export function newestEvent() {
  return kept[0]?.event ?? null;
}

// open are the events that are to be acknowledged, newest first.
export function open() {
  return kept.map(({ event }) => event).filter(isOpen);
}

// add takes a message with events.
export function add(message) {
  for (const event of message.events) {
    if (event.number > newest) {
      newest = event.number;
      const element = item(event, doing);
      kept.unshift({ event, element });
      list.prepend(element);
    }
  }
  for (const { element } of kept.splice(mostShown)) {
    element.remove();
  }
  drawSeen();
}

// acknowledged takes the numbers of all events that somebody has seen.
export function acknowledged(message) {
  seen = new Set(message.events);
  drawSeen();
}

function isOpen(event) {
  return event.edge === "raised" && !ofPeople(event.kind) && !seen.has(event.number);
}

function drawSeen() {
  for (const { event, element } of kept) {
    const state = isOpen(event) ? "open" : seen.has(event.number) ? "seen" : "none";
    if (element.dataset.seen !== state) {
      element.dataset.seen = state;
    }
    element.lastElementChild.hidden = state === "none" || (state === "open" && !may);
    element.lastElementChild.disabled = state === "seen";
    put(element.lastElementChild, state === "seen" ? "✓ seen" : "Acknowledge");
  }
  const still = open().length;
  seenAll.hidden = !may || still < 2;
  const shown = newest > kept.length ? `${newest}, the newest ${kept.length} shown` : String(newest);
  put(count, still > 0 ? `${shown} · ${still} not acknowledged` : shown);
  changed();
}
