// The wall screen: the verdict band and one plot, large enough for three metres. The plot is the one in which
// what stands shows best.

import { gravity, plotOf } from "./kinds.js";
import { stands } from "./marks.js";

const root = document.documentElement;
const wideEnough = matchMedia("(min-width: 2500px)"); // nobody sits in front of such a window

let on = wideEnough.matches;

// build shows the wall screen where the window is so wide.
export function build() {
  wideEnough.addEventListener("change", () => set(wideEnough.matches));
  addEventListener("keydown", (event) => {
    if (event.key === "Escape" && on && document.querySelector("dialog[open]") === null) {
      set(false);
    }
  });
  set(on);
}

// toggle turns the wall screen on and off.
export function toggle() {
  set(!on && root.dataset.mode !== "setup");
}

// marked chooses the plot anew: that of the newest fault, or else of the newest of what stands.
export function marked() {
  const events = stands();
  const event = events.findLast((one) => gravity(one) === "fault") ?? events.at(-1);
  const plot = plotOf(event?.kind ?? "");
  for (const element of document.querySelectorAll(".plot")) {
    element.dataset.wall = String(element.id === `plot-${plot}`);
  }
}

function set(is) {
  on = is;
  root.dataset.wall = String(on);
  marked();
  dispatchEvent(new Event("resize")); // the type has another size
}
