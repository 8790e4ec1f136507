// One plot with its title, legend and help.

import { make, put } from "./format.js";
import { colour, dress } from "./palette.js";
import { follow, readout } from "./readout.js";
import { zoom } from "./zoom.js";

const svgSpace = "http://www.w3.org/2000/svg";

export class Panel {
  // plot is one of the description's; look shows a band in all plots, with nulls the whole.
  constructor(plot, description, look) {
    this.plot = plot;
    this.spacingHz = description.spacing_hz;
    this.columns = plot.curves.map(() => []);
    this.names = plot.curves.map((curve) => curve.name);
    this.message = null;
    this.stale = false; // there is something to draw
    this.inView = true;

    this.element = make("figure", "plot");
    this.element.id = `plot-${plot.id}`;
    this.legend = make("ul", "curves");
    this.note = make("p", "note", "No estimates yet.");
    this.canvas = make("div", "canvas");
    const head = make("figcaption");
    head.append(make("h3", "", plot.title), this.legend, this.help());
    this.element.append(head, this.canvas, this.note);
    if (plot.needs !== "") {
      this.note.textContent = plot.needs;
      this.legend.hidden = true;
      return;
    }
    this.canvas.tabIndex = 0;
    this.canvas.setAttribute("role", "img");
    this.canvas.setAttribute("aria-label", `${plot.title}. ${plot.help} Left and right arrow keys read values.`);
    if (plot.axis === "frequency") {
      zoom(this, look);
    }
  }

  help() {
    const details = make("details");
    details.append(make("summary", "", "how to read"), make("p", "", this.plot.help));
    return details;
  }

  // open makes the chart, once the element is in the page.
  open() {
    if (this.plot.needs !== "") {
      return;
    }
    this.chart = echarts.init(this.canvas, null, { renderer: "canvas" });
    this.recolour();
    follow(this);
    new ResizeObserver(() => this.chart.resize()).observe(this.canvas);
    new IntersectionObserver(([entry]) => {
      this.inView = entry.isIntersecting;
      this.draw();
    }, { rootMargin: "200px" }).observe(this.element);
  }

  // recolour draws all anew in the colours of the moment.
  recolour() {
    if (this.chart === undefined) {
      return;
    }
    const option = dress(this.plot.option, this.plot.curves);
    option.tooltip = { ...option.tooltip, ...readout(this) };
    this.chart.setOption(option, { notMerge: true });
    this.stale = true;
    this.listCurves();
    this.draw();
  }

  // take keeps the newest refresh; it is drawn when the plot is in view.
  take(message) {
    this.message = message;
    this.stale = true;
    this.draw();
  }

  draw() {
    if (!this.stale || !this.inView || this.message === null) {
      return;
    }
    this.stale = false;
    const { curves, view } = this.message;
    this.x = this.plot.axis === "frequency" ? this.frequencies(view, curves) : null;
    this.columns = this.plot.curves.map((curve) => column(curves, curve));
    this.names = this.plot.curves.map((curve) => curve.name || (view.names[curve.from]?.[Math.max(curve.index, 0)] ?? ""));
    this.chart.setOption({
      xAxis: this.plot.axis === "frequency"
        ? this.plot.panes.map(() => ({ min: view.first * this.spacingHz, max: view.last * this.spacingHz }))
        : [],
      series: this.plot.curves.map((curve, i) => ({ name: this.names[i], data: this.points(i, curve, curves) })),
    });
    this.listCurves();
    const known = this.columns.some((values) => values.some((value) => value !== null));
    this.note.hidden = known;
    put(this.note, "Unknown as yet: more averages than forces are needed.");
    this.element.dataset.number = String(this.message.number);
  }

  // points are curve i as ECharts takes it.
  points(i, curve, curves) {
    if (this.x === null) {
      return this.columns[i];
    }
    const floor = curve.above === "" ? null : curves[curve.above] ?? [];
    return this.columns[i].map((value, n) => [this.x[n], floor === null || value === null ? value : value - floor[n]]);
  }

  // frequencies are those of the points: a point stands in the middle of its lines.
  frequencies({ first, last, step }) {
    const count = Math.ceil((last - first + 1) / step);
    return Array.from({ length: count }, (_, i) => this.spacingHz * Math.min(first + i * step + (step - 1) / 2, last));
  }

  listCurves() {
    const shown = this.plot.curves
      .map((curve, i) => ({ curve, name: curve.group || this.names[i], there: curve.name !== "" || this.columns[i].length > 0 }))
      .filter(({ curve, there }, i, all) => there && (curve.group === "" || curve.group !== all[i + 1]?.curve.group));
    const key = JSON.stringify([shown.map(({ name }) => name), colour("text")]);
    if (key !== this.listed) {
      this.listed = key;
      this.legend.replaceChildren(...shown.map(({ curve, name }) => legendItem(curve, name)));
    }
  }
}

// column is what the message has for a curve, an array, empty where it has nothing.
function column(curves, curve) {
  const found = curves[curve.from];
  return (curve.index < 0 ? found : found?.[curve.index]) ?? [];
}

const dashes = { solid: "", dashed: "5 3", dotted: "1.5 2.5" };

function legendItem(curve, name) {
  const item = make("li");
  const picture = document.createElementNS(svgSpace, "svg");
  const line = document.createElementNS(svgSpace, "line");
  const thick = curve.above !== "" ? 9 : ({ fine: 1.2, bold: 3.5 }[curve.weight] ?? 2);
  for (const [key, value] of Object.entries({ x1: 0, x2: 22, y1: 5, y2: 5, "stroke-width": thick, "stroke-dasharray": dashes[curve.dash], stroke: colour(curve.role), "stroke-opacity": curve.above === "" ? 1 : 0.35 })) {
    line.setAttribute(key, value);
  }
  picture.setAttribute("viewBox", "0 0 22 10");
  picture.append(line);
  item.append(picture, make("span", "", name));
  return item;
}
