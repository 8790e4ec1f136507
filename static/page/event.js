// One event in the list.

import { make } from "./format.js";
import { gravity, ofPeople, words } from "./kinds.js";
import { picture } from "./svg.js";

// item is the row of an event; its last element is the button to acknowledge it.
export function item(event, { showBand, acknowledge }) {
  const element = make("li");
  element.dataset.edge = event.edge;
  element.dataset.gravity = ofPeople(event.kind) ? "people" : gravity(event);
  const what = make("span", "what", event.text);
  for (const [from, to] of bands(event)) {
    what.append(" ", bandButton(from, to, showBand));
  }
  const seen = make("button", "seen");
  seen.type = "button";
  seen.onclick = () => acknowledge(event.number, false);
  element.append(
    make("span", "when", clock(event)),
    make("span", "quiet", source(event)),
    sign(event),
    make("b", "kind", words(event.kind)),
    make("b", "channels", event.channels.join(", ")),
    what,
    seen,
  );
  return element;
}

// clock is the time on the wall when the event came.
export function clock(event) {
  return new Date(event.at_ms).toLocaleTimeString([], { hour12: false });
}

// source is its time in the measurement.
function source(event) {
  return event.time_s === null ? "time unknown" : `${event.time_s.toFixed(1)} s`;
}

// bands are the event's bands that are known.
export function bands(event) {
  return event.bands_hz.filter(([from, to]) => from !== null && to !== null);
}

function bandButton(from, to, showBand) {
  const button = make("button", "band", `show ${from.toFixed(0)} to ${to.toFixed(0)} Hz`);
  button.type = "button";
  button.onclick = () => showBand(from, to);
  return button;
}

// sign says by shape and word whether the event began, ended, happened, or was people's doing.
function sign(event) {
  const element = make("b", "edge");
  if (ofPeople(event.kind)) {
    element.append("✎");
  } else if (event.edge === "cleared") {
    element.append("✓ cleared");
  } else {
    element.append(picture(`mark-${gravity(event)}`), "raised");
  }
  return element;
}
