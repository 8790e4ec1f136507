// Which channels are shown first.

import { grade } from "./decibels.js";
import { coherence, gravitiesAt } from "./marks.js";

// ranking are the indices of the channels whose name, point or axis has all the words, in an order: "worst",
// "name" or "rig". recent and held are peaks, by channel.
export function ranking(channels, order, words, recent, held) {
  const wanted = words.toLowerCase().split(/\s+/).filter((word) => word !== "");
  const found = channels.map((_, i) => i).filter((i) => {
    const { name, point, axis } = channels[i];
    const text = `${name} ${point} ${axis}`.toLowerCase();
    return wanted.every((word) => text.includes(word));
  });
  switch (order) {
    case "name": return found.sort((a, b) => channels[a].name.localeCompare(channels[b].name, undefined, { numeric: true }));
    case "worst": return found.map((i) => [i, trouble(i, recent, held)]).sort(([, a], [, b]) => b - a).map(([i]) => i);
  }
  return found;
}

// trouble is larger the more urgently a channel is to be looked at; among equals the higher peak leads.
function trouble(i, recent, held) {
  const marks = gravitiesAt(i);
  const rank = marks.has("fault") ? 6
    : grade(recent[i].peak) === "limit" || marks.has("limit") ? 5
    : marks.size > 0 ? 4
    : grade(recent[i].peak) === "silent" ? 3
    : coherence(i) === "low" ? 2
    : grade(held[i]) === "limit" ? 1 : 0;
  return 2 * rank + Math.min(recent[i].peak ?? 0, 1);
}
