// Reading values off the plots: by pointer or by arrow keys, at one frequency in all plots at once.

import { nearest } from "./columns.js";
import { at, text } from "./flags.js";
import { digits, make } from "./format.js";
import { margins } from "./palette.js";
import { say } from "./say.js";

const panels = [];
let told = { panel: null, hz: undefined }; // where something is read, and what

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
    // on the side where the pointer is not: what is read stays in sight
    position: ([x], params, element, rect, { contentSize: [width], viewSize: [whole] }) => [x > whole / 2 ? margins().left : Math.max(whole - width - margins().right, 0), 0],
    formatter: (params) => table(panel, [params].flat().find(({ seriesId }) => !seriesId.startsWith("kept"))),
  };
}

// follow has the panel's frequency marked in all plots of frequency, and the arrow keys move it.
export function follow(panel) {
  panel.reading = 0;
  const show = (index) => {
    const series = longest(panel);
    panel.reading = Math.min(Math.max(index, 0), panel.columns[series].length - 1);
    panel.chart.dispatchAction({ type: "showTip", seriesIndex: series, dataIndex: panel.reading });
    say(spoken(table(panel, { dataIndex: panel.reading, value: panel.columns[series][panel.reading] })));
  };
  panel.canvas.addEventListener("keydown", (event) => {
    const step = { ArrowLeft: -1, ArrowRight: 1 }[event.key];
    if (step !== undefined && longest(panel) >= 0) {
      event.preventDefault();
      show(panel.reading + step * (event.shiftKey ? 10 : 1));
    } else if (event.key === "Escape") {
      panel.chart.dispatchAction({ type: "hideTip" });
    }
  });
  panel.canvas.addEventListener("blur", () => panel.chart.dispatchAction({ type: "hideTip" }));
  if (panel.plot.axis !== "frequency") {
    return;
  }
  join(panel);
  panel.chart.on("updateAxisPointer", ({ axesInfo }) => {
    tell(panel, axesInfo?.find(({ axisDim }) => axisDim === "x")?.value);
  });
}

// join has a panel marked at the frequency that is read in another.
export function join(panel) {
  panels.push(panel);
  panel.canvas.addEventListener("pointerleave", () => tell(panel, undefined));
}

// tell marks a frequency in all panels but the one where it is read.
export function tell(panel, hz) {
  told = { panel, hz };
  panels.forEach(remark);
}

// remark puts a panel's mark where it belongs, also when the panel has come to show another band.
export function remark(panel) {
  mark(panel, panel === told.panel ? undefined : told.hz);
}

// longest is the index of a shown series that has points, to hang the readout on.
function longest(panel) {
  return panel.columns.findIndex((values, i) => values.length > 0 && !panel.hides(i));
}

// mark draws a line at a frequency, without one it takes the line away.
function mark(panel, hz) {
  const show = hz !== undefined && panel.axis !== undefined && hz >= panel.axis.min && hz <= panel.axis.max;
  panel.canvas.classList.toggle("marked", show);
  if (show) {
    panel.canvas.style.setProperty("--mark", `${panel.pixel(hz)}px`);
  }
}

function table(panel, point) {
  const index = point?.dataIndex;
  if (point === undefined || (panel.x !== null && index >= panel.x.length)) {
    return ""; // nothing is there, or the band has just become another one
  }
  const box = make("div", "readout");
  const x = panel.x === null ? point.value[0] : panel.x[index];
  box.append(make("b", "", panel.x === null ? `${digits(x, 5)} averages` : lines(panel, index)));
  const rows = make("dl");
  const row = (name, value, curve, more = "") => {
    const of = panel.unit(curve);
    rows.append(make("dt", "", name), make("dd", "", value === null ? "unknown" : `${digits(value, 4).replace("-", "−")}${of === "" ? "" : ` ${of}`}${more}`));
  };
  panel.plot.curves.forEach((curve, i) => {
    const value = panel.hides(i) || curve.quiet ? undefined : valueAt(panel.columns[i], panel.x, point);
    if (value !== undefined) {
      row(panel.names[i], value, curve, worst(panel, curve, index));
    }
    const of = panel.plot.curves.findIndex(({ from }) => from === curve.above);
    if (of >= 0 && !panel.hides(i)) {
      region(rows, panel, [of, i].map((edge) => panel.columns[edge][index] ?? null), curve);
    }
  });
  for (const { letter, traces } of panel.kept) {
    for (const { curve, name, x: at, values } of panel.compared(traces)) {
      const shown = panel.shown(curve, values);
      row(`${letter} ${name}`, (at === null ? shown.find(([n]) => n === x)?.[1] : shown[nearest(at, x)]) ?? null, curve);
    }
  }
  box.append(rows);
  if (panel.plot.axis === "frequency") {
    at(panel.page.standing, x).forEach((band) => box.append(make("p", "", `▲ ${text(band)}`)));
  }
  return box;
}

// region says from where to where a band reaches.
function region(rows, panel, [low, high], curve) {
  const text = low === null || high === null ? "unknown" : `${digits(low)} to ${digits(high)} ${panel.unit(curve)}`.replaceAll("-", "−");
  rows.append(make("dt", "", curve.group), make("dd", "", text));
}

// spoken is a table as it is read out.
function spoken(box) {
  const rows = [...box.querySelectorAll("dt")].map((name) => `${name.textContent} ${name.nextSibling.textContent}`);
  return [box.querySelector("b").textContent, ...rows, ...[...box.querySelectorAll("p")].map((note) => note.textContent)].join("; ");
}

// lines are the frequencies that a point stands for.
function lines(panel, index) {
  const [from, to] = [panel.points[index].from, panel.points[index].to].map((line) => digits(line * panel.page.spacingHz, 5));
  return from === to ? `${from} Hz` : `${from} to ${to} Hz`;
}

// valueAt is the value of a column at the point: undefined where it has none there, null where unknown.
function valueAt(column, x, point) {
  return x === null ? column.find(([at]) => at === point.value[0])?.[1] : column[point.dataIndex];
}

// worst names the response that is worst.
function worst(panel, curve, index) {
  const of = panel.message?.curves[`${curve.from}_of`];
  return of === undefined ? "" : ` (${panel.page.responses[of[index]]})`;
}
