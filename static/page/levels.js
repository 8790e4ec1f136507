// The channel levels: a row a channel, or with many channels a strip of all and rows for those that are
// closest to their limits.

import { make, put } from "./format.js";

const mostRows = 24; // beyond that the rows would push the plots off the screen
const closestRows = 16;
const bottomDB = -60;
const limit = 1 - 2 ** -15; // where a channel counts as at its limit
const holdMs = 2000; // long enough to read a peak by
const nearDB = 3; // "close" from here on; common practice, no source
const orderMs = 2000; // rows that jump cannot be read

const list = document.getElementById("levels");
const strip = document.getElementById("strip");
const block = document.getElementById("block");

let channels = [];
let slots = []; // of the strip, one a channel; empty without strip
let rows = []; // { element, parts, channel }
let held = []; // peak and when, by channel
let ordered = 0;

// build makes the rows for the channels of a run.
export function build(all) {
  channels = all;
  held = channels.map(() => ({ peak: 0, at: -Infinity }));
  const many = channels.length > mostRows;
  strip.hidden = !many;
  slots = many ? channels.map(() => make("i")) : [];
  strip.replaceChildren(...slots.map((slot) => {
    const box = make("span");
    box.append(slot);
    return box;
  }));
  rows = channels.slice(0, many ? closestRows : channels.length).map((_, i) => makeRow(i));
  rows.forEach(label);
  list.replaceChildren(...rows.map((row) => row.element));
}

function makeRow(channel) {
  const element = make("li");
  const parts = { name: make("span", "name"), meter: make("span", "meter"), peak: make("i", "peak"), rms: make("i", "rms"), left: make("span", "left") };
  parts.meter.append(parts.peak, parts.rms);
  element.append(parts.name, parts.meter, parts.left);
  return { element, parts, channel };
}

// take shows a message with levels.
export function take(message) {
  const now = performance.now();
  channels.forEach((_, i) => hold(held[i], message.peak[i], now));
  slots.forEach((slot, i) => {
    slot.style.transform = `scaleY(${share(message.peak[i])})`;
    slot.parentElement.dataset.level = word(held[i].peak);
  });
  if (slots.length > 0 && now - ordered > orderMs) {
    ordered = now;
    order();
  }
  rows.forEach((row) => draw(row, message));
  put(block, message.block === null ? "" : `next block ${Math.round(100 * message.block)} %`);
}

function hold(kept, peak, now) {
  if (peak === null) {
    kept.peak = null;
  } else if (!(kept.peak > peak) || now - kept.at > holdMs) {
    kept.peak = peak;
    kept.at = now;
  }
}

function order() {
  const closest = channels.map((_, i) => i).sort((a, b) => held[b].peak - held[a].peak);
  rows.forEach((row, i) => {
    row.channel = closest[i];
    label(row);
  });
}

function label({ element, parts, channel }) {
  const { name, kind, point, axis } = channels[channel];
  put(parts.name, name);
  element.title = `${kind} ${name}, point ${point}, ${axis}`;
}

function draw({ element, parts, channel }, message) {
  const peak = held[channel].peak;
  element.dataset.level = word(peak);
  parts.peak.style.transform = `scaleX(${share(message.peak[channel])})`;
  parts.rms.style.left = `${100 * share(message.rms[channel])}%`;
  put(parts.left, text(peak));
}

function decibels(level) {
  return 20 * Math.log10(level);
}

// share is where a level stands between bottomDB and the limit, 0 to 1.
function share(level) {
  return level > 0 ? Math.min(Math.max(1 - decibels(level) / bottomDB, 0), 1) : 0;
}

function word(peak) {
  if (peak === null) {
    return "unknown";
  }
  return peak >= limit ? "limit" : decibels(peak) > -nearDB ? "near" : peak === 0 ? "silent" : "fine";
}

function text(peak) {
  switch (word(peak)) {
    case "unknown": return "unknown";
    case "limit": return "▲ AT LIMIT";
    case "silent": return "○ silent";
    case "near": return `△ ${(-decibels(peak)).toFixed(1)} dB left`;
  }
  return `${(-decibels(peak)).toFixed(0)} dB left`;
}
