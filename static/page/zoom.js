// Narrowing and widening the band, in all plots of frequency at once: by dragging across a plot, by a double
// click, and by keys.

import { make } from "./format.js";

const leastPixels = 8; // below that a drag was a click

// zoom adds that to a panel. look(fromHz, toHz) shows a band, with nulls the whole.
export function zoom(panel, look) {
  const box = make("div", "dragged");
  box.hidden = true;
  panel.canvas.append(box);
  let from = null;

  const x = (event) => event.clientX - panel.canvas.getBoundingClientRect().left;

  panel.canvas.addEventListener("pointerdown", (event) => {
    if (event.button === 0 && panel.axis !== undefined) {
      from = x(event);
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
      const ends = [from, x(event)].map((pixel) => panel.hertz(pixel)).sort((a, b) => a - b);
      look(Math.max(ends[0], panel.axis.min), Math.min(ends[1], panel.axis.max));
    }
    from = null;
    box.hidden = true;
  });
  addEventListener("pointercancel", () => {
    from = null;
    box.hidden = true;
  });
  panel.canvas.addEventListener("dblclick", () => look(null, null));
  panel.canvas.addEventListener("keydown", (event) => {
    const factor = { "+": 0.5, "=": 0.5, "-": 2 }[event.key];
    if (factor !== undefined && panel.axis !== undefined && !event.ctrlKey && !event.metaKey) {
      event.preventDefault();
      widen(panel, factor, look);
    } else if (event.key === "0") {
      event.preventDefault();
      look(null, null);
    }
  });
}

// widen shows a band that is wider by a factor, with what is read where it is.
function widen(panel, factor, look) {
  const { axis } = panel;
  const read = panel.canvas.classList.contains("reading") ? panel.x?.[panel.reading] : undefined;
  const at = read === undefined ? 0.5 : axis.at(read);
  const [from, to] = [axis.hz(at - at * factor), axis.hz(at + (1 - at) * factor)];
  look(Math.max(from, 0), to >= panel.page.lastHz && from <= 0 ? null : to);
}
