// All plots of the page.

import { Panel } from "./panel.js";
import { watch } from "./palette.js";

const leastMs = 240; // between two drawings: faster than that nobody reads, and six plots take their time

let panels = [];
let newest = null;
let drawnAt = -Infinity;
let timer = 0;

// build makes the plots of a description; look(fromHz, toHz) shows a band in all.
export function build(description, look) {
  const responses = description.channels.slice(description.forces).map(({ name }) => name);
  panels = description.plots.map((plot) => new Panel(plot, description, look));
  document.getElementById("plots").replaceChildren(...panels.map((panel) => panel.element));
  for (const panel of panels) {
    panel.responses = responses;
    panel.open();
  }
  watch(() => panels.forEach((panel) => panel.recolour()));
}

// take keeps the newest refresh and draws it soon; one with another view at once.
export function take(message) {
  const chosen = newest === null || JSON.stringify(newest.view) !== JSON.stringify(message.view);
  newest = message;
  const wait = chosen ? 0 : Math.max(0, drawnAt + leastMs - performance.now());
  clearTimeout(timer);
  timer = setTimeout(draw, wait);
}

function draw() {
  drawnAt = performance.now();
  panels.forEach((panel) => panel.take(newest));
}
