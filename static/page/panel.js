// One plot: its frame, its chart, and what of the newest refresh it shows.

import { axis } from "./axis.js";
import { column, frequencies, points, sizes } from "./columns.js";
import { flag } from "./flags.js";
import { put } from "./format.js";
import { Frame } from "./frame.js";
import { Legend } from "./legend.js";
import { dress, grids, margins } from "./palette.js";
import { reach } from "./reach.js";
import { follow, readout, remark } from "./readout.js";
import { nameOf, series, traces } from "./series.js";
import { Span } from "./span.js";
import { zoom } from "./zoom.js";

export class Panel extends Frame {
  // plot is one of the description's; page is what all plots of the page share, see charts.js.
  constructor(plot, page) {
    super(plot, page);
    this.columns = plot.curves.map(() => []); // as they are shown, in dB or as sizes
    this.names = plot.curves.map((curve) => curve.name);
    this.x = null; // Hz by point
    this.log = false; // equal ratios of frequency are equally far apart
    this.legend = new Legend(plot.curves, () => this.redraw());
    this.spread();
    this.frame(this.legend.element);
    if (plot.needs === "") {
      this.canvas.setAttribute("role", "img");
      this.canvas.setAttribute("aria-label", `${plot.title}. ${plot.help} Arrow keys left and right read values, plus and minus narrow and widen the band.`);
    }
  }

  // spread makes the vertical ranges anew.
  spread() {
    this.spans = this.plot.panes.map((pane) => new Span(pane, this.sizesOf(pane) === null ? pane.least : 0));
  }

  // sizesOf is what a pane shows in place of dB, or null.
  sizesOf(pane) {
    return this.page.sizes ? pane.sizes : null;
  }

  unit(curve) {
    return (curve.unit === "dB" ? this.sizesOf(this.plot.panes[curve.pane])?.unit : undefined) ?? curve.unit;
  }

  // open makes the chart, once the element is in the page.
  open() {
    if (this.plot.needs !== "") {
      return;
    }
    this.chart = echarts.init(this.canvas, null, { renderer: "canvas" });
    this.overlay();
    this.recolour();
    follow(this);
    if (this.plot.axis === "frequency") {
      zoom(this, this.page.look);
    }
    this.watchSize(() => {
      this.chart.resize();
      this.chart.setOption({ grid: grids(this.plot.panes.length, this.canvas.clientHeight) });
      this.place();
    });
  }

  // recolour draws all anew: in other colours, on other scales, with other kept traces.
  recolour() {
    if (this.chart !== undefined) {
      this.margin();
      this.remake();
      this.redraw();
    }
  }

  // remake gives the chart all of its option anew, without data.
  remake() {
    const { panes, curves, axis } = this.plot;
    const option = dress(this.plot.option, curves, panes.map((pane) => this.sizesOf(pane)?.quantity ?? pane.quantity), this.canvas.clientHeight);
    option.tooltip = { ...option.tooltip, ...readout(this) };
    if (axis === "frequency") {
      option.xAxis.forEach((x) => { x.type = this.log ? "log" : "value"; });
    }
    this.chart.setOption(option, { notMerge: true });
  }

  // scale has all redrawn after the page turned to other scales.
  scale() {
    this.spread();
    this.recolour();
  }

  refit() {
    this.spans.forEach((span) => span.refit());
    this.redraw();
  }

  paint() {
    const { curves, view } = this.message;
    if (view.log !== this.log) {
      this.log = view.log;
      this.remake(); // an axis cannot become another kind
    }
    const chosen = JSON.stringify([view.names, view.first, view.last, this.page.band]);
    if (chosen !== this.chosen) {
      this.chosen = chosen;
      this.spans.forEach((span) => span.refit()); // another curve may jump to its range
    }
    this.x = this.frequencies(view);
    this.points = points(view.first, view.runs);
    this.columns = this.plot.curves.map((curve) => this.shown(curve, column(curves, curve, this.x?.length ?? 0)));
    this.names = this.plot.curves.map((curve) => nameOf(curve, view));
    this.kept = this.page.kept.of(this.plot.id).filter(({ letter }) => !this.legend.hidesKept(letter));
    this.chart.setOption({ xAxis: this.xAxes(view), yAxis: this.yAxes(), series: series(this) });
    this.legend.show(this.plot.curves, this.names, this.columns.map((values, i) => values.length > 0 || this.plot.curves[i].name !== ""), this.page.kept.of(this.plot.id));
    this.place();
    this.say();
  }

  // shown is a column of a curve as this page shows it.
  shown(curve, values) {
    const pane = this.sizesOf(this.plot.panes[curve.pane]);
    return pane === null || curve.unit !== "dB" ? values : sizes(values, pane.decade);
  }

  hides(i) {
    return this.legend.hides(this.plot.curves[i], this.names[i]);
  }

  xAxes(view) {
    if (this.plot.axis !== "frequency") {
      return [];
    }
    this.axis = axis(view, this.page.spacingHz, this.page.band);
    const { min, max, ticks } = this.axis;
    const custom = { customValues: ticks };
    return this.plot.panes.map(() => ({ min, max, axisTick: custom, axisLabel: custom }));
  }

  yAxes() {
    return this.plot.panes.map((_, p) => this.spans[p].of(...reach(this, p), performance.now()) ?? {});
  }

  // compared are those of kept traces whose curves are not hidden.
  compared(traces) {
    return traces.filter(({ curve, name }) => !this.legend.hides(curve, name));
  }

  frequencies(view) {
    return this.plot.axis === "frequency" ? frequencies(view, this.page.spacingHz) : null;
  }

  // traces are what can be kept of a message.
  traces({ curves, view }) {
    return traces(this.plot.curves, curves, view, this.frequencies(view));
  }

  // place puts what lies over the chart where it belongs.
  place() {
    if (this.axis !== undefined) {
      flag(this, this.page.standing);
      remark(this);
    }
  }

  // pixel is where a frequency stands from the left edge of the canvas; hertz is the frequency at a pixel.
  pixel(hz) {
    const { left, right } = margins();
    return left + this.axis.at(hz) * (this.canvas.clientWidth - left - right);
  }

  hertz(pixel) {
    const { left, right } = margins();
    return this.axis.hz((pixel - left) / (this.canvas.clientWidth - left - right));
  }

  // say tells when there is nothing to see, and why.
  say() {
    const known = this.columns.some((values) => values.some((value) => value !== null));
    const all = this.plot.curves.every((_, i) => this.columns[i].length === 0 || this.hides(i));
    this.note.hidden = known && !all;
    put(this.note, known ? "All curves are hidden: the legend shows them." : "Unknown as yet: more averages than forces are needed.");
    this.element.dataset.number = String(this.message.number);
  }
}
