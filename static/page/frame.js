// The frame of a plot: title, tools, legend, help, and the place where it is drawn. Panel and Heatmap fill it.

import { make } from "./format.js";
import { margins } from "./palette.js";
import { Table } from "./table.js";

export class Frame {
  constructor(plot, page) {
    this.plot = plot;
    this.page = page;
    this.message = null; // the newest refresh that has this plot's curves
    this.stale = false; // there is something to draw
    this.inView = false;
    this.element = make("figure", "plot");
    this.element.id = `plot-${plot.id}`;
    this.lane = make("div", "lane"); // for what stands over the bands
    this.canvas = make("div", "canvas");
    this.note = make("p", "note", "No estimates yet.");
    this.still = make("b", "still", "‖ STANDS STILL");
  }

  // frame puts the parts together.
  frame(legend) {
    const head = make("figcaption");
    head.append(make("h3", "", this.plot.title), this.still, ...(this.value === undefined ? [] : [this.value]));
    this.stage = make("div", "stage");
    this.stage.append(this.canvas, this.note);
    this.element.append(head, legend, this.lane, this.stage);
    if (this.plot.needs !== "") {
      this.note.textContent = this.plot.needs;
      legend.hidden = true;
      head.append(this.help());
      return;
    }
    this.canvas.tabIndex = 0;
    this.table = new Table(this);
    head.append(this.tools(), this.help());
    this.stage.append(this.table.element);
  }

  tools() {
    const tools = make("span", "tools");
    const tool = (word, title, act) => {
      const button = make("button", "", word);
      button.type = "button";
      button.title = title;
      button.onclick = () => act(button);
      tools.append(button);
    };
    if (this.traces !== undefined) {
      tool("keep", "keep the traces as they are now, to compare with", () => this.page.keep(this));
      tool("fit", "fit the vertical axes to what is shown", () => this.refit());
    }
    tool("table", "the latest values as a table", (button) => {
      button.setAttribute("aria-pressed", String(this.table.toggle()));
    });
    tools.lastElementChild.setAttribute("aria-pressed", "false");
    return tools;
  }

  help() {
    const details = make("details");
    details.append(make("summary", "", "?"), make("p", "", this.plot.help));
    details.firstElementChild.title = "how to read this plot";
    details.firstElementChild.setAttribute("aria-label", `how to read: ${this.plot.title}`);
    return details;
  }

  // overlay makes the layer over the chart, which pointers do not notice.
  overlay() {
    this.margin();
    this.bands = make("div", "bands");
    this.canvas.append(this.bands);
  }

  // margin tells the style sheet where the panes lie.
  margin({ top, bottom } = margins()) {
    this.canvas.style.setProperty("--over", `${top}px`);
    this.canvas.style.setProperty("--under", `${bottom}px`);
  }

  // watchSize calls resized when the canvas has another size, and keeps track of whether the plot is in view.
  watchSize(resized) {
    new ResizeObserver(() => {
      if (this.canvas.clientHeight > 0) { // else it is not shown at all
        resized();
        this.draw();
      }
      this.page.resized();
    }).observe(this.canvas);
    new IntersectionObserver(([entry]) => {
      this.inView = entry.isIntersecting;
      this.page.seen();
      this.draw();
    }, { rootMargin: "200px" }).observe(this.element);
  }

  // take keeps a refresh with this plot's curves; it is drawn when the plot is in view.
  take(message) {
    this.message = message;
    this.redraw();
  }

  redraw() {
    this.stale = true;
    this.draw();
  }

  draw() {
    if (this.stale && this.inView && this.message !== null && this.plot.needs === "" && this.canvas.clientHeight > 0) {
      this.stale = false;
      this.paint();
      this.table.take();
    }
  }

  // standStill says in the plot that it does not follow the run.
  standStill(is) {
    this.element.dataset.still = String(is);
  }
}
