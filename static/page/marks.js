// What stands against channels, and how coherent responses are, by the newest message.

import { gravity } from "./kinds.js";

let forces = 0;
let channels = [];
let standing = [];
let against = new Map(); // what stands, by name of channel
let low = new Set(); // responses
let known = new Set(); // responses

// build takes the channels of a description.
export function build(description) {
  channels = description.channels;
  forces = description.forces;
}

// take keeps a message with marks.
export function take(message) {
  standing = message.standing;
  low = new Set(message.low_coherence);
  known = new Set(message.known);
  against = new Map();
  for (const event of standing) {
    for (const name of event.channels) {
      against.set(name, [...(against.get(name) ?? []), event]);
    }
  }
}

// eventsAt are the events, { kind, cause }, that stand against channel i.
export function eventsAt(i) {
  return against.get(channels[i].name) ?? [];
}

// gravitiesAt are the gravities of those.
export function gravitiesAt(i) {
  return new Set(eventsAt(i).map(gravity));
}

// stands are all events, { kind, cause, channels }, that stand, oldest first.
export function stands() {
  return standing;
}

// coherence is "low", "well" or "unknown" of a response, "none" of a force.
export function coherence(i) {
  return i < forces ? "none" : low.has(i - forces) ? "low" : known.has(i - forces) ? "well" : "unknown";
}
