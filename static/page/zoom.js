// Dragging across a plot of frequency shows that band in all of them; a double click shows all again.

import { make } from "./format.js";

const leastPixels = 8; // below that a drag was a click

// zoom adds that to a panel. look(fromHz, toHz) shows a band, with nulls the whole.
export function zoom(panel, look) {
  const box = make("div", "dragged");
  box.hidden = true;
  panel.canvas.append(box);
  let from = null;

  const x = (event) => event.clientX - panel.canvas.getBoundingClientRect().left;
  const hertz = (pixel) => panel.chart.convertFromPixel({ xAxisIndex: 0 }, pixel);

  panel.canvas.addEventListener("pointerdown", (event) => {
    if (event.button === 0 && panel.x) {
      from = x(event);
      panel.canvas.append(box); // the chart empties its element when it is made
    }
  });
  addEventListener("pointermove", (event) => {
    if (from !== null) {
      const to = x(event);
      box.hidden = Math.abs(to - from) < leastPixels;
      box.style.left = `${Math.min(from, to)}px`;
      box.style.width = `${Math.abs(to - from)}px`;
    }
  });
  addEventListener("pointerup", (event) => {
    if (from !== null && !box.hidden) {
      const ends = [hertz(from), hertz(x(event))].sort((a, b) => a - b);
      look(Math.max(ends[0], 0), ends[1]);
    }
    from = null;
    box.hidden = true;
  });
  panel.canvas.addEventListener("dblclick", () => look(null, null));
}
