// The line of the band that holds the newest event nobody has acknowledged, or else the newest of all.

import { bands, clock } from "./event.js";
import { newestEvent, open } from "./events.js";
import { make, put, some } from "./format.js";
import { gravity, ofPeople, words } from "./kinds.js";
import { say } from "./say.js";

const line = document.getElementById("news");
const mark = document.getElementById("news-mark");
const text = document.getElementById("news-text");
const band = document.getElementById("news-band");
const seen = document.getElementById("news-seen");

let may = false;
let said = 0; // number of the event that was read out last
let shown = null;

// build sets what the line's buttons do: showBand(fromHz, toHz), acknowledge(number, before).
export function build({ showBand, acknowledge }) {
  band.onclick = () => showBand(...bands(shown)[0]);
  seen.onclick = () => acknowledge(shown.number, false);
}

// acknowledge presses the line's button, which the wall screen does not show.
export function acknowledge() {
  if (!seen.hidden) {
    seen.click();
  }
}

// control says whether this page may acknowledge.
export function control(allowed) {
  may = allowed;
  draw();
}

// draw shows what the list of events has.
export function draw() {
  const waiting = open().sort((a, b) => rank(a) - rank(b)); // the newest of the gravest leads
  shown = waiting[0] ?? newestEvent();
  line.dataset.edge = shown === null ? "" : waiting.length > 0 ? "open" : "past";
  if (shown === null) {
    return;
  }
  const more = waiting.length > 1 ? ` · ${waiting.length - 1} more` : "";
  put(mark, `${clock(shown)} ${edge(waiting.length > 0)}${more}`);
  text.replaceChildren(make("b", "", `${words(shown.kind)}:`), ` ${shown.text}`);
  text.title = shown.text;
  const [first] = bands(shown);
  band.hidden = first === undefined;
  put(band, first === undefined ? "" : `show ${first[0].toFixed(0)} to ${first[1].toFixed(0)} Hz`);
  seen.hidden = !may || waiting.length === 0;
  const newest = open()[0];
  if (newest?.number > said) {
    said = newest.number;
    say(`${some(waiting.length, "event")} not acknowledged. ${words(newest.kind)}. ${newest.text}`);
  }
}

function rank(event) {
  return { fault: 0, limit: 1, gap: 2 }[gravity(event)] ?? 3;
}

function edge(isOpen) {
  return isOpen ? "▲" : ofPeople(shown.kind) ? "✎" : shown.edge === "cleared" ? "✓ cleared:" : "seen:";
}
