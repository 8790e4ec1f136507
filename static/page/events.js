// The list of events, newest first.

import { make, put } from "./format.js";

const mostShown = 200; // the file of events has them all

const list = document.getElementById("events");
const count = document.getElementById("event-count");

let newest = 0;
let dropped = 0;
let showBand = () => {};

// build sets what happens when an event's band is asked for: show(fromHz, toHz).
export function build(show) {
  showBand = show;
}

// last is the number of the newest event that is here.
export function last() {
  return newest;
}

// add takes a message with events.
export function add(message) {
  for (const event of message.events) {
    if (event.number > newest) {
      newest = event.number;
      list.prepend(item(event));
    }
  }
  while (list.children.length > mostShown) {
    list.lastElementChild.remove();
  }
  dropped = newest - list.children.length;
  put(count, dropped > 0 ? `${newest}, the newest ${list.children.length} shown` : String(newest));
}

function item(event) {
  const element = make("li");
  element.dataset.edge = event.edge;
  const clock = new Date(event.at_ms).toLocaleTimeString([], { hour12: false });
  const source = event.time_s === null ? "time unknown" : `${event.time_s.toFixed(1)} s`;
  const mark = event.edge === "cleared" ? "✓ cleared" : "▲ raised";
  element.append(
    make("span", "when", `${clock} · ${source}`),
    make("b", "edge", mark),
    make("b", "kind", event.kind),
    make("span", "what", event.text),
  );
  for (const [from, to] of event.bands_hz) {
    if (from !== null && to !== null) {
      const button = make("button", "", `show ${from.toFixed(0)} to ${to.toFixed(0)} Hz`);
      button.type = "button";
      button.onclick = () => showBand(from, to);
      element.append(button);
    }
  }
  return element;
}
