// Reading values off the plots: by pointer or by arrow keys, at one frequency in all plots at once.

import { digits, make } from "./format.js";

const panels = [];

// readout is the part of a chart's tooltip option that shows the values at the pointer. Names only ever
// go in as text.
export function readout(panel) {
  return {
    confine: true,
    transitionDuration: 0,
    backgroundColor: "transparent",
    borderWidth: 0,
    padding: 0,
    extraCssText: "box-shadow: none",
    formatter: (params) => table(panel, [params].flat()[0]),
  };
}

// follow has the panel's frequency marked in all plots of frequency, and the arrow keys move it.
export function follow(panel) {
  let at = 0;
  const show = (index) => {
    at = Math.min(Math.max(index, 0), panel.columns[0].length - 1);
    panel.chart.dispatchAction({ type: "showTip", seriesIndex: longest(panel), dataIndex: at });
  };
  panel.canvas.addEventListener("keydown", (event) => {
    const step = { ArrowLeft: -1, ArrowRight: 1 }[event.key];
    if (step !== undefined) {
      event.preventDefault();
      show(at + step * (event.shiftKey ? 10 : 1));
    } else if (event.key === "Escape") {
      panel.chart.dispatchAction({ type: "hideTip" });
    }
  });
  panel.canvas.addEventListener("blur", () => panel.chart.dispatchAction({ type: "hideTip" }));
  if (panel.plot.axis !== "frequency") {
    return;
  }
  panels.push(panel);
  panel.chart.on("updateAxisPointer", ({ axesInfo }) => {
    const frequency = axesInfo?.find(({ axisDim }) => axisDim === "x")?.value;
    panels.filter((other) => other !== panel).forEach((other) => mark(other, frequency));
  });
  panel.canvas.addEventListener("pointerleave", () => panels.forEach((other) => mark(other, undefined)));
}

// longest is the index of a series that has points, to hang the readout on.
function longest(panel) {
  return panel.columns.findIndex((values) => values.length > 0);
}

// mark draws a line at a frequency, without one it takes the line away.
function mark(panel, frequency) {
  const x = frequency === undefined ? NaN : panel.chart.convertToPixel({ xAxisIndex: 0 }, frequency);
  const show = Number.isFinite(x);
  panel.canvas.classList.toggle("marked", show);
  if (show) {
    panel.canvas.style.setProperty("--mark", `${x}px`);
  }
}

function table(panel, point) {
  const box = make("div", "readout");
  if (point === undefined) {
    return box;
  }
  const index = point.dataIndex;
  const x = panel.x === null ? point.value[0] : panel.x[index];
  const unit = panel.plot.axis === "frequency" ? "Hz" : "averages";
  box.append(make("b", "", `${digits(x, 5)} ${unit}`));
  const rows = make("dl");
  panel.plot.curves.forEach((curve, i) => {
    const value = valueAt(panel, i, point);
    if (value === undefined) {
      return;
    }
    const text = value === null ? "unknown" : `${digits(value, 4)}${curve.unit === "" ? "" : ` ${curve.unit}`}`;
    rows.append(make("dt", "", panel.names[i]), make("dd", "", text + more(panel, curve, index, value)));
  });
  box.append(rows);
  return box;
}

// valueAt is the value of curve i at the point: undefined where it has none there, null where unknown.
function valueAt(panel, i, point) {
  if (panel.x !== null) {
    return panel.columns[i][point.dataIndex];
  }
  return panel.columns[i].find(([x]) => x === point.value[0])?.[1];
}

// more names the response that is worst.
function more(panel, curve, index, value) {
  const worst = panel.message?.curves[`${curve.from}_of`];
  return worst === undefined || value === null ? "" : ` (${panel.responses[worst[index]]})`;
}
