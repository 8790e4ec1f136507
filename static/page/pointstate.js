// How a point stands: by the worst of its channels.

import { grade } from "./decibels.js";
import { words as kindWords } from "./kinds.js";
import { peakNow } from "./levels.js";
import { coherence, eventsAt, gravitiesAt } from "./marks.js";

const phrases = { limit: "at its limit", low: "low coherence or signal", look: "look", well: "well", unknown: "not known yet", none: "no channels" };

// standOf is "fault", "limit", "look", "low", "well" or "unknown" of the channels with those indices, the worst that
// any of them has; "none" without channels.
export function standOf(channels) {
  if (channels.length === 0) {
    return "none";
  }
  const has = (state) => channels.some((i) => stateAt(i) === state);
  return ["fault", "limit", "look", "low", "well"].find(has) ?? "unknown";
}

function stateAt(i) {
  const marks = gravitiesAt(i);
  if (marks.has("fault")) {
    return "fault";
  }
  if (marks.has("limit") || grade(peakNow(i)) === "limit") {
    return "limit";
  }
  if (marks.has("look")) {
    return "look";
  }
  if (marks.has("low") || coherence(i) === "low") {
    return "low";
  }
  return coherence(i) === "well" ? "well" : "unknown"; // of a force alone nothing is known but what stands
}

// words say why the channels of a point stand as they do.
export function words(state, channels) {
  const kinds = [...new Set(channels.flatMap(eventsAt).map(({ kind }) => kindWords(kind)))];
  return state === "fault" || state === "look" ? `${state === "fault" ? "FAULT: " : ""}${kinds.join(", ")}` : phrases[state];
}
