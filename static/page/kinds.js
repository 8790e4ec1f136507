// What the kinds of events mean to a page.

const gravities = {
  "no-drive": "fault", "force-lost": "fault", "force-not-reaching": "fault", "response-suspect": "fault",
  "structure-changed": "fault", "dead-channel": "fault", "twin-channels": "fault", "polarity-suspect": "fault",
  "reciprocity-off": "fault",
  "overrange": "limit", "gap": "gap", "low-signal": "low",
};

const plots = {
  "no-drive": "forces", "force-lost": "forces", "level-changed": "forces",
  "forces-correlated": "independence", "reciprocity-off": "reciprocity", "polarity-suspect": "response",
};

const operators = new Set(["note", "paused", "resumed", "started-over"]);

// gravity is how a channel with that event is marked: "fault", "limit", "gap", "low" or "look". A reciprocity that
// is off by something local is a matter of where things sit.
export function gravity({ kind, cause }) {
  return cause === "local" ? "look" : gravities[kind] ?? "look";
}

// words are the kind as people say it.
export function words(kind) {
  return kind.replaceAll("-", " ");
}

// plotOf is the plot in which such an event shows best.
export function plotOf(kind) {
  return plots[kind] ?? "coherence";
}

// ofPeople tells whether people, not the watch, made such an event.
export function ofPeople(kind) {
  return operators.has(kind);
}
