// The channel levels: rows for channels, and with many of them a strip of all besides.

import { grade, share } from "./decibels.js";
import { make, put, some } from "./format.js";
import { Row } from "./levelrow.js";
import { gravitiesAt, stands } from "./marks.js";
import { ranking } from "./ranking.js";
import { roving } from "./roving.js";

const mostRows = 24; // beyond that rows would fill the page
const shownRows = 16;
const nowMs = 2000; // long enough to read a peak by
const orderMs = 2000; // rows that jump cannot be read

const list = document.getElementById("levels");
const strip = document.getElementById("strip");
const block = document.getElementById("block");
const gap = document.getElementById("gap");
const hold = document.getElementById("hold");
const search = document.getElementById("search");
const order = document.getElementById("order");
const matches = document.getElementById("matches");
const settle = roving(list, "button");

let channels = [];
let slots = []; // of the strip, one a channel; empty without strip
let rows = [];
let recent = []; // highest peak of the last moment and when, by channel
let held = []; // since the last reset, by channel
let ordered = 0;

// build makes the rows for the channels of a run. reset(channel) forgets a held peak, null all; choose(channel)
// shows a channel in the plots.
export function build(all, reset, choose) {
  channels = all;
  recent = channels.map(() => ({ peak: null, at: -Infinity }));
  held = channels.map(() => null);
  const many = channels.length > mostRows;
  strip.hidden = !many;
  document.getElementById("sieve").hidden = !many;
  slots = many ? channels.map(() => make("i")) : [];
  strip.replaceChildren(...slots.map((slot) => {
    const box = make("span");
    box.append(slot);
    return box;
  }));
  rows = channels.slice(0, many ? shownRows : channels.length).map(() => new Row(reset, choose));
  list.replaceChildren(...rows.map((row) => row.element));
  order.value = many ? "worst" : "rig";
  search.oninput = arrange;
  order.onchange = arrange;
  hold.onclick = () => {
    hold.ariaPressed = String(!holds());
    arrange();
  };
  document.getElementById("reset").onclick = () => reset(null);
  arrange();
}

// control says whether this page may reset what all pages share.
export function control(may) {
  document.getElementById("reset").hidden = !may;
  rows.forEach((row) => row.control(may));
  settle();
}

// holdOrNot turns holding on and off, on this page.
export function holdOrNot() {
  hold.click();
}

// take shows a message with levels.
export function take(message) {
  const now = performance.now();
  channels.forEach((_, i) => follow(recent[i], message.peak[i], now));
  slots.forEach((slot, i) => {
    slot.style.transform = `scaleY(${share(message.peak[i])})`;
    const word = gravitiesAt(i).has("fault") ? "fault" : grade(recent[i].peak);
    if (slot.parentElement.dataset.level !== word) {
      slot.parentElement.dataset.level = word;
    }
  });
  if (order.value === "worst" && now - ordered > orderMs && !list.contains(document.activeElement)) {
    arrange();
  }
  for (const row of rows) {
    row.draw(message, recent, holds() ? held : null);
  }
  put(block, message.block === null ? "" : `next block ${Math.round(100 * message.block)} %`);
}

// takeHeld takes the held peaks, which all pages share.
export function takeHeld(message) {
  held = message.peak;
}

// marked shows new marks.
export function marked() {
  const lost = stands().some(({ kind }) => kind === "gap");
  gap.hidden = !lost;
  put(gap, lost ? "▬ ▬ GAP: frames were lost, on all channels" : "");
  rows.forEach((row) => row.mark());
}

// peakNow is the highest peak of channel i in the last moment.
export function peakNow(i) {
  return recent[i]?.peak ?? null;
}

function holds() {
  return hold.ariaPressed === "true";
}

function follow(kept, peak, now) {
  if (peak === null) {
    kept.peak = null;
  } else if (!(kept.peak > peak) || now - kept.at > nowMs) {
    kept.peak = peak;
    kept.at = now;
  }
}

// arrange gives each row its channel.
function arrange() {
  ordered = performance.now();
  const found = ranking(channels, order.value, search.value, recent, held);
  rows.forEach((row, n) => row.show(found[n] === undefined ? null : found[n], channels[found[n]]));
  const left = found.length - rows.length;
  put(matches, found.length === 0 ? "no such channel" : left > 0 ? `${rows.length} of ${some(found.length, "channel")}` : some(found.length, "channel"));
  settle();
}
